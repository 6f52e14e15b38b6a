import { useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { parseCode } from '../../../shared/quantity/code.ts'
import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import { codeOfWordText } from '../../../shared/solver/coding.ts'
import type { Applied, PerAdjuster, Which } from '../../../shared/solver/types.ts'
import { Field } from '../../ui/field.tsx'
import { Select } from '../../ui/input.tsx'
import type { CurrentCodes } from './current.ts'
import { LineField, narrowSelect } from './head-fields.tsx'
import { isSameApplied } from './search.ts'
import { codesText, neutralText } from './words.ts'

type AppliedFieldProps = {
  applied: Applied | null
  current: CurrentCodes | null
  trimmers: { gain: Trimmer | null; offset: Trimmer | null }
  isFixed: boolean
  error: string | null
  onChange: (applied: Applied) => void
}

/**
 * Which codes were loaded while measuring. A unit that has codes is never taken as neutral without being asked:
 * codes loaded but not said would be corrected twice.
 */
export function AppliedField(props: AppliedFieldProps) {
  const { applied, current, trimmers, isFixed, error, onChange } = props
  const isCurrent = current?.codes ? isSameApplied(applied, current.codes) : false
  const [isTyped, setIsTyped] = useState(false)
  const chosen = isTyped
    ? 'typed'
    : applied === null
      ? ''
      : applied === 'neutral'
        ? 'neutral'
        : isCurrent
          ? 'current'
          : 'typed'
  const choose = (value: string) => {
    setIsTyped(value === 'typed')
    if (value === 'neutral') onChange('neutral')
    if (value === 'current' && current?.codes) onChange(current.codes)
  }
  return (
    <>
      <Field label="codes applied" layout="inline" error={error}>
        <Select
          className={narrowSelect}
          value={chosen}
          disabled={isFixed}
          onChange={(event) => choose(event.target.value)}
        >
          {applied === null && !isTyped ? <option value="">say which</option> : null}
          <option value="neutral">{neutralText(trimmers)}</option>
          {current?.codes ? (
            <option value="current">
              pass {current.pass}: {codesText(current.codes)}
            </option>
          ) : null}
          <option value="typed">others, typed</option>
        </Select>
      </Field>
      {chosen === 'typed' ? (
        <TypedCodes
          applied={applied === null || applied === 'neutral' ? {} : applied}
          trimmers={trimmers}
          onChange={onChange}
        />
      ) : null}
    </>
  )
}

type TypedCodesProps = {
  applied: PerAdjuster<number>
  trimmers: { gain: Trimmer | null; offset: Trimmer | null }
  onChange: (applied: Applied) => void
}

function TypedCodes({ applied, trimmers, onChange }: TypedCodesProps) {
  const [wrong, setWrong] = useState<PerAdjuster<string>>({})
  const take = (which: Which, trimmer: Trimmer) => (text: string) => {
    const read = readAppliedCode(text, which, trimmer)
    setWrong((before) => ({ ...before, [which]: typeof read === 'string' ? read : undefined }))
    if (typeof read === 'number') onChange({ ...applied, [which]: read })
  }
  return (['gain', 'offset'] as const).map((which) => {
    const trimmer = trimmers[which]
    return trimmer ? (
      <LineField
        key={which}
        label={which}
        chars={8}
        value={applied[which] === undefined ? '' : String(applied[which])}
        error={wrong[which]}
        onCommit={take(which, trimmer)}
      />
    ) : null
  })
}

/** Decimal is the code; hex after 0x is the word as the page shows and copies it. A sentence when it is neither. */
export function readAppliedCode(text: string, which: Which, trimmer: Trimmer): number | string {
  const clean = text.trim()
  const top = trimmer.count - 1
  if (/^0x/i.test(clean)) {
    const code = codeOfWordText(clean, trimmer.bits, trimmer.coding)
    return code ?? `${clean} is not a word of ${trimmer.bits} bits.`
  }
  try {
    const code = parseCode(clean, which)
    return code <= top ? code : `Code ${code} does not exist: the highest is ${top}.`
  } catch (error) {
    if (isOgeeError(error)) return error.message
    throw error
  }
}
