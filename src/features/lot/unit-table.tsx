import { memo, useMemo, useRef } from 'react'
import type { LotUnit } from '../../../shared/contract/lots.ts'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { fixed } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { rowHeight, rowPx, Spacer, stickyHead, useRowWindow } from '../../ui/row-window.tsx'
import { Section } from '../../ui/section.tsx'
import { None, Td, Th } from '../../ui/table.tsx'
import { utcText } from '../../ui/time-text.tsx'
import { usePrinting } from '../../ui/use-printing.ts'
import { StandingWord } from './standing-word.tsx'

/** Rows that are drawn when the page is printed; a longer table is for the file. */
const printedMost = 2_000

type Row = { unit: LotUnit; place: LotUnit['places'][number] | null; key: string }

function rowsOf(units: readonly LotUnit[], find: string): Row[] {
  const wanted = find.toLowerCase()
  return units
    .filter(({ unit, places }) => places.length > 0 && unit.toLowerCase().includes(wanted))
    .flatMap((unit) =>
      unit.places.map((place) => ({ unit, place, key: `${unit.unit} ${place.range} ${place.channel}` })),
    )
}

type Props = {
  units: readonly LotUnit[]
  find: string
  onFind: (find: string) => void
  /** Left out where nobody here may mark reference units. */
  onReference?: ((unit: string, reference: boolean) => void) | undefined
}

/** All channels of a lot in a window of rows: ten thousand scroll as ten do. */
export default function UnitTable({ units, find, onFind, onReference }: Props) {
  const rows = useMemo(() => rowsOf(units, find), [units, find])
  const hasRanges = useMemo(() => new Set(rows.map(({ place }) => place?.range)).size > 1, [rows])
  return (
    <Section
      title="Units"
      className="print:break-inside-auto print:break-before-page"
      note={`${rows.length} channels`}
      side={
        <span className="print:hidden">
          <Field label="find unit" layout="inline">
            <TextInput
              className="!min-h-6 w-40!"
              value={find}
              onChange={(event) => onFind(event.target.value)}
            />
          </Field>
        </span>
      }
    >
      {rows.length === 0 ? <p className="py-1 text-ink-2">No unit of this lot is called that.</p> : null}
      <Window rows={rows} hasRanges={hasRanges} onReference={onReference} />
    </Section>
  )
}

type WindowProps = { rows: readonly Row[]; hasRanges: boolean; onReference: Props['onReference'] }

function Window({ rows, hasRanges, onReference }: WindowProps) {
  const box = useRef<HTMLDivElement>(null)
  const body = useRef<HTMLTableSectionElement>(null)
  const isPrinting = usePrinting()
  const height = rowPx()
  const shown = useRowWindow(body, rows.length, height, box)
  const { first, end } = isPrinting ? { first: 0, end: Math.min(rows.length, printedMost) } : shown
  return (
    <section
      ref={box}
      aria-label="Units of the lot, scrolls"
      // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reached by keyboard (WCAG 2.1.1)
      tabIndex={0}
      className="relative max-h-[420px] overflow-auto [contain:content] print:max-h-none print:break-inside-auto print:overflow-visible print:[contain:none]"
    >
      {/* Fixed columns: widths that follow the rows in view would jump while scrolling. */}
      <table
        className="w-full min-w-[56rem] table-fixed border-collapse text-body"
        aria-rowcount={rows.length + 1}
      >
        <caption className="sr-only">Every channel of every unit: standing, errors, codes</caption>
        <Head hasRanges={hasRanges} hasActs={onReference !== undefined} />
        <tbody ref={body}>
          <Spacer px={first * height} />
          {rows.slice(first, end).map((row, i) => (
            <UnitRow
              key={row.key}
              row={row}
              index={first + i}
              hasRanges={hasRanges}
              onReference={onReference}
            />
          ))}
          <Spacer px={(rows.length - end) * height} />
        </tbody>
      </table>
    </section>
  )
}

const heads = [
  { name: 'unit', width: 'w-[15%]' },
  { name: 'ch.', width: 'w-[5%]', right: true },
  { name: 'range', width: 'w-[8%]' },
  { name: 'standing', width: 'w-[16%]' },
  { name: 'pass', width: 'w-[5%]', right: true },
  { name: 'gain error', unit: 'ppm', width: 'w-[9%] text-copper', right: true },
  { name: 'offset error', unit: 'µV', width: 'w-[9%] text-tide', right: true },
  { name: 'gain', unit: 'code', width: 'w-[7%]', right: true },
  { name: 'offset', unit: 'code', width: 'w-[7%]', right: true },
  { name: 'as left', unit: 'LSB', width: 'w-[7%]', right: true },
  { name: 'station', width: 'w-[10%]' },
  { name: 'read', unit: 'UTC', width: 'w-[10%]' },
] as const

function Head({ hasRanges, hasActs }: { hasRanges: boolean; hasActs: boolean }) {
  return (
    <thead className={stickyHead}>
      <tr>
        {heads
          .filter(({ name }) => hasRanges || name !== 'range')
          .map(({ name, width, ...more }) => (
            <Th
              key={name + width}
              className={width}
              align={'right' in more ? 'right' : 'left'}
              unit={'unit' in more ? more.unit : undefined}
            >
              {name}
            </Th>
          ))}
        {hasActs ? (
          <Th className="w-[11%]">
            <span className="sr-only">reference</span>
          </Th>
        ) : null}
      </tr>
    </thead>
  )
}

type RowProps = { row: Row; index: number; hasRanges: boolean; onReference: Props['onReference'] }

const UnitRow = memo(function UnitRow({ row: { unit, place }, index, hasRanges, onReference }: RowProps) {
  if (place === null) return null
  const { found, codes, left } = place
  const record = codes?.record ?? found?.record ?? left?.record
  return (
    <tr aria-rowindex={index + 2} className={`${rowHeight} hover:bg-shade`}>
      <Td className="truncate">
        {record ? (
          <LinkButton className="min-h-6" to={paths.record(record)}>
            {unit.unit}
          </LinkButton>
        ) : (
          unit.unit
        )}
      </Td>
      <Td align="right">{place.channel}</Td>
      {hasRanges ? <Td>{place.range}</Td> : null}
      <Td className="whitespace-nowrap">
        {unit.reference ? (
          <span className="text-ink-2">reference</span>
        ) : (
          <StandingWord standing={place.standing} />
        )}
      </Td>
      <Td align="right">{place.pass}</Td>
      <Td align="right">{number(found?.gainErrorPpm ?? null, 2, 1)}</Td>
      <Td align="right">{number(found?.offsetErrorV ?? null, 1, 1e6)}</Td>
      <Td align="right">{codes?.gain ?? <None />}</Td>
      <Td align="right">{codes?.offset ?? <None />}</Td>
      <Td align="right">{number(left === null ? null : Math.abs(left.worstLsb), 2, 1, 'auto')}</Td>
      <Td className="truncate">{found?.station ?? left?.station ?? ''}</Td>
      <Td className="whitespace-nowrap text-ink-2">{utcText(found?.at ?? left?.at ?? '').slice(5, 16)}</Td>
      {onReference ? (
        <Td align="right" className="print:hidden">
          <Button
            look="quiet"
            className="!min-h-6"
            onClick={() => onReference(unit.unit, !unit.reference)}
            aria-label={`${unit.reference ? 'unmark' : 'mark reference'}: unit ${unit.unit}`}
          >
            {unit.reference ? 'unmark' : 'mark reference'}
          </Button>
        </Td>
      ) : null}
    </tr>
  )
})

function number(value: number | null, decimals: number, factor: number, sign: 'auto' | 'always' = 'always') {
  if (value === null) return <None />
  return <NumberText>{fixed(value * factor, decimals, sign)}</NumberText>
}
