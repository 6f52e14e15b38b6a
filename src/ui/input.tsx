import type { ComponentProps } from 'react'
import { useFieldIds } from './field.tsx'

/** Field ground, one rule below, no box; in error a 2 px rule in bad. */
const look =
  'min-h-7 rounded-none border-0 border-b border-rule bg-field px-1 text-text text-ink aria-invalid:border-b-2 aria-invalid:border-bad disabled:text-ink-3 placeholder:text-ink-3 forced-colors:border print:border-0'

/** One line of text. Never `type=number`: the wheel would change it unseen and units would be impossible. */
export function TextInput({ className = '', type = 'text', ...rest }: ComponentProps<'input'>) {
  const field = useFieldIds()
  return (
    <input
      type={type}
      id={field?.id}
      aria-describedby={field?.describedBy}
      aria-invalid={field?.invalid || undefined}
      autoComplete="off"
      spellCheck={false}
      className={`${look} w-full ${className}`}
      {...rest}
    />
  )
}

export function TextArea({ className = '', ...rest }: ComponentProps<'textarea'>) {
  const field = useFieldIds()
  return (
    <textarea
      id={field?.id}
      aria-describedby={field?.describedBy}
      aria-invalid={field?.invalid || undefined}
      rows={2}
      className={`${look} w-full py-1 ${className}`}
      {...rest}
    />
  )
}

/** The native select, styled: its list, keys and speech come with the platform. */
export function Select({ className = '', children, ...rest }: ComponentProps<'select'>) {
  const field = useFieldIds()
  return (
    <select
      id={field?.id}
      aria-describedby={field?.describedBy}
      aria-invalid={field?.invalid || undefined}
      className={`${look} field-sizing-content max-w-full pr-1 ${className}`}
      {...rest}
    >
      {children}
    </select>
  )
}

/** A checkbox with its label as one target. */
export function Checkbox({ children, className = '', ...rest }: ComponentProps<'input'>) {
  return (
    <label className={`inline-flex min-h-6 items-center gap-2 ${className}`}>
      <input type="checkbox" className="size-4 shrink-0 accent-ink" {...rest} />
      <span>{children}</span>
    </label>
  )
}
