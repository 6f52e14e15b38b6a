import { type ReactNode, useEffect, useId, useRef } from 'react'

/**
 * The native modal dialog: the platform keeps the focus inside, gives it back, and closes on Escape. The focus starts at
 * `data-first` where something has it (React's autoFocus acts before the dialog is shown, on what cannot be focused yet).
 */
export function Dialog({
  title,
  onClose,
  children,
}: {
  title: string
  /** Left out, the dialog cannot be closed by Escape: something must be decided. */
  onClose?: (() => void) | undefined
  children: ReactNode
}) {
  const ref = useRef<HTMLDialogElement>(null)
  const titleId = useId()
  useEffect(() => {
    const dialog = ref.current
    if (dialog && !dialog.open) dialog.showModal()
    dialog?.querySelector<HTMLElement>('[data-first]')?.focus()
    return () => dialog?.close()
  }, [])
  return (
    <dialog
      ref={ref}
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault()
        onClose?.()
      }}
      className="m-auto w-[28rem] max-w-[calc(100vw-1rem)] border border-rule bg-paper p-5 text-ink"
    >
      <h2 id={titleId} className="border-b-2 border-ink pb-1.5 text-head font-semibold">
        {title}
      </h2>
      <div className="mt-3">{children}</div>
    </dialog>
  )
}
