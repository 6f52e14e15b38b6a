import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import type { ConverterRange } from '../../../shared/solver/converter.ts'
import { effectAt, nullingPoint } from '../../../shared/solver/solve-exact.ts'
import type { FitResult, Missing, TrimResult, Which } from '../../../shared/solver/types.ts'
import { engineering, fixed } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { Td, Th } from '../../ui/table.tsx'
import { Verdict } from '../../ui/verdict.tsx'

type ShortfallProps = {
  fit: FitResult
  trim: TrimResult
  trimmers: { gain: Trimmer | null; offset: Trimmer | null }
  range: ConverterRange
}

const limitWords = { codes: 'limit of the codes', node: 'limit of the node' } as const

/** What was wanted, what the limit is, and what would remain: at the node, at the output, as an error. */
export function ShortfallTable({ fit, trim, trimmers, range }: ShortfallProps) {
  const { shortfall } = trim
  if (!shortfall) return null
  return (
    <>
      {(['gain', 'offset'] as const).map((which) => {
        const missing = shortfall[which]
        const trimmer = trimmers[which]
        if (!missing || !trimmer) return null
        return <OneShort key={which} which={which} missing={missing} trimmer={trimmer} range={range} />
      })}
      <p className="mt-3 text-text">
        <Verdict verdict="out-of-reach" /> {sentenceOf(fit, trim)}
      </p>
      <p className="mt-1 text-body text-ink-2">
        With the adjusters at their limits, at most{' '}
        <NumberText>{engineering(shortfall.remainingWorstV, 'V')}</NumberText> (
        {fixed(shortfall.remainingWorstV / range.lsbV, 1)} LSB) would remain.
      </p>
    </>
  )
}

function sentenceOf(fit: FitResult, trim: TrimResult): string {
  const short = (['gain', 'offset'] as const).filter((which) => trim.shortfall?.[which] !== undefined)
  const times = Math.max(...short.map((which) => trim.reachUsed[which] ?? 0))
  const wanted =
    times > 0 ? `The wanted change is ${fixed(times, 2)} times the reach.` : 'There is no reach on that side.'
  const path = short.join(' and ')
  const linearity = fixed(fit.linearity.maxLsb, 2)
  return fit.flags.some((flag) => flag.flag !== 'narrow')
    ? `${wanted} The fit is flagged, so look at the points first.`
    : `${wanted} The fit is good (linearity ${linearity} LSB), so the error is real: look for a wrong resistor in the ${path} path before trimming.`
}

type OneShortProps = { which: Which; missing: Missing; trimmer: Trimmer; range: ConverterRange }

function OneShort({ which, missing, trimmer, range }: OneShortProps) {
  const lever = effectAt(trimmer, nullingPoint(trimmer, range))
  const error = (volts: number) =>
    which === 'gain'
      ? `${fixed(trimmer.beta * volts * 1e6, 0, 'always')} ppm`
      : `${fixed(trimmer.alpha * volts * 1e6, 1, 'always')} µV`
  const toNode = (volts: number) => volts - trimmer.nominalV
  const rows = [
    ['wanted', toNode(missing.wantedV)],
    [limitWords[missing.by], toNode(missing.limitV)],
    ['would remain', missing.wantedV - missing.limitV],
  ] as const
  return (
    <table className="mb-2 w-full border-collapse text-body">
      <caption className="sr-only">{`What falls short of the ${which} adjuster`}</caption>
      <thead>
        <tr>
          <Th>{which} adjuster</Th>
          <Th align="right">at the node</Th>
          <Th align="right">at the output</Th>
          <Th align="right">{which}</Th>
        </tr>
      </thead>
      <tbody>
        {rows.map(([name, volts]) => {
          const isLast = name === 'would remain'
          // What remains of the error has the sign of the error, against the sign of the change that would null it.
          const atOutput = isLast ? -volts : volts
          return (
            <tr key={name} className={isLast ? 'font-semibold' : ''}>
              <Td>{name}</Td>
              <Td align="right">
                <NumberText>{engineering(volts, 'V', 4, 'always')}</NumberText>
              </Td>
              <Td align="right">
                <NumberText>{engineering(lever * atOutput, 'V', 4, 'always')}</NumberText>
              </Td>
              <Td align="right">
                <NumberText>{error(atOutput)}</NumberText>
              </Td>
            </tr>
          )
        })}
      </tbody>
    </table>
  )
}
