import { memo } from 'react'
import { Button } from '../../ui/button.tsx'
import { engineering, exact } from '../../ui/number-format.ts'
import { rangeEffectRows } from './adjuster-rows.ts'
import { AskingHead, AskingRows } from './asking-rows.tsx'
import { Row, SelectCell, TextCell } from './cells.tsx'
import { type Said, useFieldText, useFormLinks } from './form-context.ts'
import { type RangeField, type RangeTexts, rangeEffect, rangeField, type Which } from './form-doc.ts'
import { Part } from './part.tsx'
import { codings, offsetPlaces } from './words.ts'

/** What of a range is understood: stands at the right of its fields. */
export type RangeHint = { fsrV: number; lsbV: number; inlV: number | null }

export const ChannelPart = memo(function ChannelPart({
  ranges,
  said,
  hints,
}: {
  ranges: readonly RangeTexts[]
  said: Said
  hints: readonly (RangeHint | null)[]
}) {
  const { store, isReadOnly } = useFormLinks()
  const { problems, remarks } = said
  const cell = (field: string, label: string) => ({
    field,
    label,
    problem: problems.get(field),
    remark: remarks.get(field),
  })
  const [first] = hints
  const several = ranges.length > 1
  const range = (one: RangeTexts, i: number) => (
    <RangeRows key={one.id} range={one} hint={hints[i] ?? null} said={said} name={several ? i + 1 : null} />
  )
  return (
    <Part number={1} title="Channel" problem={problems.get('ranges')}>
      <Row label="Resolution" hint={first ? `FSR ${exact(first.fsrV, 'V')}` : null}>
        <TextCell {...cell('bits', 'Resolution')} placeholder="18 bits" />
      </Row>
      {ranges.slice(0, 1).map(range)}
      <Row label="Coding">
        <SelectCell {...cell('coding', 'Coding')} options={codings} />
      </Row>
      {several ? null : <OffsetRow range={ranges[0]} problems={problems} />}
      <Row label="INL limit" hint={first?.inlV ? engineering(first.inlV, 'V') : null}>
        <TextCell {...cell('inl', 'INL limit')} />
      </Row>
      <Row label="Channels">
        <TextCell {...cell('channels', 'Channels')} placeholder="1" />
      </Row>
      {several ? <OffsetRow range={ranges[0]} problems={problems} /> : null}
      {ranges.slice(1).map((one, i) => (
        <div key={one.id}>
          {range(one, i + 1)}
          <OffsetRow range={one} problems={problems} />
        </div>
      ))}
      {isReadOnly ? null : (
        <Button
          look="quiet"
          className="mt-0.5 text-small"
          onClick={() => store.dispatch({ do: 'add-range' })}
        >
          add a range
        </Button>
      )}
    </Part>
  )
})

function OffsetRow({ range, problems }: { range: RangeTexts | undefined; problems: Said['problems'] }) {
  if (!range) return null
  const field = rangeField(range.id, 'offsetAt')
  return (
    <Row label="Offset read at">
      <SelectCell
        field={field}
        label={`Offset read at, ${range.name}`}
        problem={problems.get(field)}
        options={offsetPlaces}
      />
    </Row>
  )
}

function RangeRows({
  range,
  hint,
  said,
  name,
}: {
  range: RangeTexts
  hint: RangeHint | null
  said: Said
  /** Its number where there are several; they then have names of their own. */
  name: number | null
}) {
  const { store, isReadOnly } = useFormLinks()
  const { problems } = said
  const cell = (which: Exclude<RangeField, 'label' | 'offsetAt'>, label: string) => ({
    field: rangeField(range.id, which),
    label: name === null ? label : `${label} ${name}`,
    problem: problems.get(rangeField(range.id, which)),
  })
  return (
    <>
      {name === null ? null : (
        <Row
          label={`Range ${name}, name`}
          hint={
            isReadOnly || name === 1 ? null : (
              <Button
                look="quiet"
                className="-my-1 text-small"
                aria-label={`take away, range ${name}`}
                onClick={() => store.dispatch({ do: 'remove-range', id: range.id })}
              >
                take away
              </Button>
            )
          }
        >
          <TextCell {...cell('name', 'Name of range')} />
        </Row>
      )}
      <Row
        label={name === null ? 'Range' : `Range ${name}`}
        hint={hint ? `LSB ${engineering(hint.lsbV, 'V', 5)}` : null}
      >
        <TextCell {...cell('ends', 'Range')} placeholder="0 V to 10 V" />
      </Row>
      {name === null ? null : (
        <Row label="Codes shared with">
          <TextCell {...cell('sharedWith', 'Codes shared with, range')} placeholder="none" />
        </Row>
      )}
      <RangeEffects id={range.id} said={said} name={name} />
    </>
  )
}

/** Where there are several ranges an adjuster may do something else in each. */
function RangeEffects({ id, said, name }: { id: number; said: Said; name: number | null }) {
  const under = (which: Which) => rangeEffect(id, which)
  const gain = useFieldText(`${under('gain')}.effect`)
  const offset = useFieldText(`${under('offset')}.effect`)
  if (name === null && gain === '' && offset === '') return null
  return (
    <div className="mt-1">
      <AskingHead />
      <AskingRows
        rows={rangeEffectRows({ gain, offset })}
        under={under}
        said={said}
        where={name === null ? ' in this range' : ` in range ${name}`}
      />
    </div>
  )
}
