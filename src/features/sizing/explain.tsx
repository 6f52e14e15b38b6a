import { lazy, type ReactNode, Suspense, useId, useRef, useState } from 'react'
import type { Explained } from './explained.ts'

const Explanations = lazy(() => import('./explanations.tsx'))

type ExplainProps = Explained & {
  /** JSON pointers into the result; each number explained under its label. */
  of: readonly { label: string; path: string }[]
  /** What is explained, for speech: "Explain reach of gain". */
  name: string
  /** Goes to the field that an input comes from; without it inputs are text. */
  onField?: ((path: string) => void) | undefined
  className?: string
  /** The number itself. */
  children: ReactNode
}

/** A number that says on demand how it came about: formula, inputs, source. A native popover, so Escape closes it. */
export function Explain({ design, result, of, name, onField, className = '', children }: ExplainProps) {
  const [isOpen, setOpen] = useState(false)
  const wasOpen = useRef(false)
  const button = useRef<HTMLButtonElement>(null)
  const id = useId()
  return (
    <>
      <button
        ref={button}
        type="button"
        aria-expanded={isOpen}
        aria-controls={isOpen ? id : undefined}
        aria-description={`Explains ${name}.`}
        // A press outside closes a popover before the click arrives; that click must not open it again.
        onPointerDown={() => {
          wasOpen.current = isOpen
        }}
        onClick={() => {
          setOpen(!isOpen && !wasOpen.current)
          wasOpen.current = false
        }}
        className={`min-h-6 min-w-6 decoration-rule decoration-dotted underline-offset-4 hover:underline focus-visible:underline aria-expanded:underline ${className}`}
      >
        {children}
      </button>
      {isOpen && (
        <Suspense fallback={null}>
          <Explanations
            place={{ id, button, label: `How ${name} comes about`, onClose: () => setOpen(false) }}
            design={design}
            result={result}
            of={of}
            onField={onField}
          />
        </Suspense>
      )}
    </>
  )
}
