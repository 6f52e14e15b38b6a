import { type ReactNode, useEffect, useRef, useState } from 'react'

export type PopoverPlace = {
  id: string
  button: { current: HTMLButtonElement | null }
  label: string
  onClose: () => void
}

/** Browsers without popovers show it in its place in the page. */
const hasPopovers = (): boolean => 'showPopover' in HTMLElement.prototype

const widthPx = 340
const edge = 8

/** Beside its number; native, so that Escape and a press elsewhere close it. */
export function Popover({ id, button, label, onClose, children }: PopoverPlace & { children: ReactNode }) {
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
