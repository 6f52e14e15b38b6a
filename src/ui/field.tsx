import { createContext, type ReactNode, useContext, useId } from 'react'

type FieldIds = { id: string; describedBy: string | undefined; invalid: boolean }
const FieldContext = createContext<FieldIds | null>(null)

/** What an input inside a Field takes: its id, the ids of hint and error, and whether it is in error. */
export function useFieldIds(): FieldIds | null {
  return useContext(FieldContext)
}

const layouts = {
  /** Label above: narrow columns. */
  stack: { box: 'block', label: 'mb-0.5 block text-small text-ink-2', body: 'block' },
  /** Label left (112 px), field right: forms. */
  row: {
    box: 'grid grid-cols-1 narrow:grid-cols-[7rem_1fr] gap-x-2 items-baseline',
    label: 'text-body text-ink-2',
    body: 'block min-w-0',
  },
  /** Label and field in one line of text: filters and the head of Bench. */
  inline: {
    box: 'inline-flex items-baseline gap-1.5',
    label: 'text-small text-ink-2 whitespace-nowrap',
    body: 'inline-block',
  },
} as const

/**
 * Label, input, hint and error, tied together for assistive technology. The input is TextInput, Select or any
 * control that takes its ids from `useFieldIds`.
 */
export function Field({
  label,
  hint,
  error,
  layout = 'stack',
  children,
}: {
  label: ReactNode
  hint?: ReactNode
  error?: ReactNode
  layout?: keyof typeof layouts
  children: ReactNode
}) {
  const id = useId()
  const hintId = hint ? `${id}-hint` : undefined
  const errorId = error ? `${id}-error` : undefined
  const describedBy = [errorId, hintId].filter(Boolean).join(' ') || undefined
  const look = layouts[layout]
  return (
    <FieldContext value={{ id, describedBy, invalid: Boolean(error) }}>
      <div className={look.box}>
        <label htmlFor={id} className={look.label}>
          {label}
        </label>
        <span className={look.body}>
          {children}
          {error ? (
            <span id={errorId} className="mt-0.5 block text-small text-bad">
              {error}
            </span>
          ) : null}
          {hint ? (
            <span id={hintId} className="mt-0.5 block text-small text-ink-3">
              {hint}
            </span>
          ) : null}
        </span>
      </div>
    </FieldContext>
  )
}
