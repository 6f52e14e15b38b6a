import { lazy, type ReactNode, Suspense, useEffect, useId, useRef, useState } from 'react'
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
        <Popover id={id} button={button} label={`How ${name} comes about`} onClose={() => setOpen(false)}>
          <Suspense fallback={null}>
            <Explanations design={design} result={result} of={of} onField={onField} />
          </Suspense>
        </Popover>
      )}
    </>
  )
}

type PopoverProps = {
  id: string
  button: { current: HTMLButtonElement | null }
  label: string
  onClose: () => void
  children: ReactNode
}

/** Browsers without popovers show it in its place in the page. */
const hasPopovers = (): boolean => 'showPopover' in HTMLElement.prototype

const widthPx = 340
const edge = 8

function Popover({ id, button, label, onClose, children }: PopoverProps) {
  const ref = useRef<HTMLDivElement>(null)
  const [place, setPlace] = useState({ left: edge, top: edge })
  useEffect(() => {
    const own = ref.current
    const anchor = button.current?.getBoundingClientRect()
    if (!own || !anchor) return
    if (hasPopovers()) own.showPopover()
    const { height, width } = own.getBoundingClientRect()
    const below = anchor.bottom + 4
    setPlace({
      left: Math.max(edge, Math.min(anchor.left, window.innerWidth - width - edge)),
      top: below + height < window.innerHeight ? below : Math.max(edge, anchor.top - height - 4),
    })
  }, [button])
  return (
    <div
      ref={ref}
      id={id}
      popover={hasPopovers() ? 'auto' : undefined}
      role="dialog"
      aria-label={label}
      onToggle={(event) => {
        if (event.newState === 'closed') onClose()
      }}
      onKeyDown={(event) => {
        if (event.key === 'Escape') onClose()
      }}
      style={{ ...place, width: widthPx }}
      className="fixed m-0 max-w-[calc(100vw-1rem)] border border-rule bg-paper p-3 text-left text-body font-normal whitespace-normal text-ink print:hidden"
    >
      {children}
    </div>
  )
}
