import { useId } from 'react'

export type Segment<Value extends string> = { value: Value; label: string }

/** A few exclusive choices in one row (LSB, ppm, V): radio buttons, so arrows move between them. */
export function Segmented<Value extends string>({
  label,
  segments,
  value,
  onChange,
}: {
  /** Spoken, not shown. */
  label: string
  segments: readonly Segment<Value>[]
  value: Value
  onChange: (value: Value) => void
}) {
  const name = useId()
  return (
    <fieldset className="inline-flex rounded-sm border border-rule print:hidden">
      <legend className="sr-only">{label}</legend>
      {segments.map((segment) => (
        <label
          key={segment.value}
          className="relative inline-flex min-h-6 min-w-6 cursor-pointer items-center justify-center px-2.5 text-small text-ink-2 border-l border-rule [legend+&]:border-l-0 has-checked:bg-ink has-checked:font-semibold has-checked:text-paper has-focus-visible:outline-2 has-focus-visible:outline-offset-1 has-focus-visible:outline-focus forced-colors:has-checked:bg-[Highlight] forced-colors:has-checked:text-[HighlightText] forced-colors:has-checked:forced-color-adjust-none"
        >
          <input
            type="radio"
            name={name}
            value={segment.value}
            checked={segment.value === value}
            onChange={() => onChange(segment.value)}
            className="absolute inset-0 size-full cursor-pointer opacity-0"
          />
          {segment.label}
        </label>
      ))}
    </fieldset>
  )
}
