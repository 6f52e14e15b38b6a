import { memo, type ReactNode, useEffect, useId, useRef } from 'react'
import { minus } from '../../ui/number-format.ts'
import { useFieldText, useFormLinks } from './form-context.ts'
import { textOf } from './form-doc.ts'

/** Field ground, one rule below, no box; 25 px as the form's rows; in error a 2 px rule in bad. */
const look =
  'block h-[25px] w-full min-w-0 rounded-none border-0 border-b border-rule bg-field px-1 text-body text-ink aria-invalid:border-b-2 aria-invalid:border-bad placeholder:text-ink-3 forced-colors:border print:hidden'

type CellProps = {
  /** Name in the form's state. */
  field: string
  /** Spoken; what stands beside the cell says it to the eye. */
  label: string
  problem?: string | undefined
  remark?: string | undefined
  placeholder?: string
}

/** One text of the form, which it reads itself: a key in one field draws no other. */
export const TextCell = memo(function TextCell(props: CellProps) {
  const { isReadOnly } = useFormLinks()
  return isReadOnly ? <ReadCell {...props} /> : <TypedCell key={props.field} {...props} />
})

function ReadCell({ field, remark }: CellProps) {
  return <Printed text={useFieldText(field)} remark={remark} />
}

/** The browser keeps the text that is typed; only another text in the form is put in, so that a key draws nothing here. */
function TypedCell({ field, label, problem, remark, placeholder = 'not stated' }: CellProps) {
  const { store } = useFormLinks()
  const input = useRef<HTMLInputElement>(null)
  const printed = useRef<HTMLSpanElement>(null)
  const id = useId()
  const begun = useRef(textOf(store.get().doc, field)).current
  useEffect(() => {
    const show = () => {
      const text = textOf(store.get().doc, field)
      if (input.current && input.current.value !== text) input.current.value = text
      if (printed.current) printed.current.textContent = onPaper(text)
    }
    show()
    return store.subscribeField(field, show)
  }, [store, field])
  return (
    <span className="block min-w-0">
      <input
        ref={input}
        type="text"
        data-field={field}
        aria-label={label}
        aria-invalid={problem ? true : undefined}
        aria-describedby={problem || remark ? id : undefined}
        autoComplete="off"
        spellCheck={false}
        placeholder={placeholder}
        defaultValue={begun}
        onChange={(event) => store.dispatch({ do: 'set', field, text: event.target.value })}
        onFocus={(event) => event.target.select()}
        onBlur={() => store.dispatch({ do: 'leave' })}
        className={look}
      />
      <span ref={printed} aria-hidden="true" className={paper}>
        {onPaper(begun)}
      </span>
      <Said id={id} problem={problem} remark={remark} />
    </span>
  )
}

/** Options that are the same array on every drawing. */
export type Options = readonly (readonly [value: string, word: string])[]

export const SelectCell = memo(function SelectCell({
  field,
  label,
  problem,
  remark,
  options,
  other,
}: Omit<CellProps, 'placeholder'> & {
  options: Options
  /** Says what is not offered; one function for every drawing. */
  other?: (text: string) => string
}) {
  const { store, isReadOnly } = useFormLinks()
  const typed = useFieldText(field)
  // Where nothing is chosen the first holds: so it is read.
  const text = typed === '' ? (options[0]?.[0] ?? '') : typed
  const id = useId()
  const word = options.find(([value]) => value === text)?.[1] ?? other?.(text) ?? text
  if (isReadOnly) return <Printed text={word} remark={remark} />
  return (
    <span className="block min-w-0">
      <select
        data-field={field}
        aria-label={label}
        aria-invalid={problem ? true : undefined}
        aria-describedby={problem || remark ? id : undefined}
        value={text}
        onChange={(event) => store.dispatch({ do: 'set', field, text: event.target.value })}
        onBlur={() => store.dispatch({ do: 'leave' })}
        className={`${look} pl-0`}
      >
        {options.every(([value]) => value !== text) ? <option value={text}>{word}</option> : null}
        {options.map(([value, name]) => (
          <option key={value} value={value}>
            {name}
          </option>
        ))}
      </select>
      <span aria-hidden="true" className={paper}>
        {onPaper(word)}
      </span>
      <Said id={id} problem={problem} remark={remark} />
    </span>
  )
})

/** Released and printed: text, no underline. */
function Printed({ text, remark }: { text: string; remark: string | undefined }) {
  return (
    <span className="block min-h-6 min-w-0 px-1 pt-[3px] [overflow-wrap:anywhere]">
      {text === '' ? <span className="text-ink-3">not stated</span> : text.replaceAll('-', minus)}
      <Said problem={undefined} remark={remark} />
    </span>
  )
}

const paper = 'hidden min-h-5 px-1 print:block'
const onPaper = (text: string) => (text === '' ? 'not stated' : text.replaceAll('-', minus))

function Said({
  id,
  problem,
  remark,
}: {
  id?: string
  problem: string | undefined
  remark: string | undefined
}) {
  if (!problem && !remark) return null
  return (
    <span id={id} className={`mt-0.5 block text-small ${problem ? 'text-bad' : 'text-caution'}`}>
      {problem ?? remark}
    </span>
  )
}

/** Label left, field, and at its right what was understood. */
export function Row({ label, hint, children }: { label: ReactNode; hint?: ReactNode; children: ReactNode }) {
  return (
    <div className="grid grid-cols-[6.75rem_minmax(0,9.5rem)_minmax(0,1fr)] items-start gap-x-2 print:grid-cols-[6rem_minmax(0,1fr)_minmax(0,1fr)]">
      <span className="pt-[4px] text-small text-ink-2 print:pt-0 print:leading-[18px]" aria-hidden="true">
        {label}
      </span>
      {children}
      <span className="pt-[4px] text-small text-ink-3 print:pt-0 print:leading-[18px]">{hint}</span>
    </div>
  )
}
