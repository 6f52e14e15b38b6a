import { fixed } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { CopyCsv } from '../../ui/plot/copy-csv.tsx'
import { Section } from '../../ui/section.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import type { Analysis, Side } from './analyse.ts'
import { ratioText, shareText, usedText } from './words.ts'

const heads = [
  'adjuster',
  'unit',
  'n',
  'mean',
  's',
  'limit_low',
  'limit_high',
  'reach_used_max',
  'cp',
  'cpk',
  'expected_out',
]

/** Cp and Cpk against what the reach nulls at the worst effect, the other adjuster at nominal. */
export function CapabilityTable({ analysis }: { analysis: Analysis }) {
  const sides = [analysis.gain, analysis.offset].filter((side): side is Side => side !== null)
  if (sides.length === 0) return null
  return (
    <Section title="Capability against reach" side={<CopyCsv csvHead={heads} csvRows={sides.map(csvRow)} />}>
      <Table caption="Mean, spread and capability of gain and offset error as found">
        <thead>
          <tr>
            <Th>error</Th>
            <Th align="right">mean</Th>
            <Th align="right">s</Th>
            <Th align="right">reach, worst effect</Th>
            <Th align="right">reach used, max</Th>
            <Th align="right">Cp</Th>
            <Th align="right">Cpk</Th>
            <Th align="right">expected out</Th>
          </tr>
        </thead>
        <tbody>
          {sides.map((side) => (
            <Row key={side.which} side={side} />
          ))}
        </tbody>
      </Table>
      <p className="mt-1 text-small text-ink-3">
        {sentenceOf(analysis)} Limits: what the reach nulls with the other adjuster at nominal
        {sides
          .filter(({ tolerance }) => tolerance > 0)
          .map(
            ({ which, tolerance }) => `, ${which} at ${fixed(tolerance * 100, 0)} % less effect than stated`,
          )
          .join('')}
        . Expected out: by the normal distribution.
      </p>
    </Section>
  )
}

function Row({ side }: { side: Side }) {
  const { which, unit, spread, worst, capability, reachUsed, expectedOut } = side
  const number = (value: number | null, decimals: number, sign: 'auto' | 'always' = 'auto') =>
    value === null ? <None /> : <NumberText>{fixed(value, decimals, sign)}</NumberText>
  const size = Math.max(Math.abs(worst.low), Math.abs(worst.high))
  const isEven = Math.abs(worst.low + worst.high) < 0.01 * size
  return (
    <tr>
      <RowHead className={which === 'gain' ? 'text-copper' : 'text-tide'}>{`${which}, ${unit}`}</RowHead>
      <Td align="right">{number(spread?.mean ?? null, 1, 'always')}</Td>
      <Td align="right">{number(spread?.s ?? null, 1)}</Td>
      <Td align="right" className="whitespace-nowrap">
        {isEven ? '±' : null}
        {isEven ? number(size, 1) : `${fixed(worst.low, 1, 'always')} to ${fixed(worst.high, 1, 'always')}`}
      </Td>
      <Td align="right">{reachUsed === null ? <None /> : usedText(reachUsed)}</Td>
      <Td align="right">{ratioText(capability?.cp ?? null)}</Td>
      <Td align="right">{ratioText(capability?.cpk ?? null)}</Td>
      <Td align="right">{shareText(expectedOut)}</Td>
    </tr>
  )
}

const csvRow = ({ which, unit, spread, worst, reachUsed, capability, expectedOut }: Side) => [
  which,
  unit === 'µV' ? 'uV' : unit,
  spread?.n ?? 0,
  spread?.mean ?? null,
  spread?.s ?? null,
  worst.low,
  worst.high,
  reachUsed,
  capability?.cp ?? null,
  capability?.cpk ?? null,
  expectedOut,
]

function sentenceOf({ outOfReach, gain, offset }: Analysis): string {
  if (outOfReach === 0) return ''
  if ((gain ?? offset)?.from === 'all') return 'All are out of reach, and all are counted.'
  return `${outOfReach} out of reach ${outOfReach === 1 ? 'is' : 'are'} left out of mean and s.`
}
