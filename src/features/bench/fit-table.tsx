import type { ReactNode } from 'react'
import type { FitResult } from '../../../shared/solver/types.ts'
import { engineering, fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'

const methodWords = { 'best-fit': 'best fit', minimax: 'minimax', terminal: 'terminal' } as const
const whyNone: Readonly<Record<string, string>> = {
  'two-points': 'two points',
  minimax: 'minimax has none',
  terminal: 'no uncertainties given',
}

type FitTableProps = { fit: FitResult; offsetAtV: number; isStale: boolean }

/** Offset error, gain error with full scale, linearity seen; each with its own U and k. */
export function FitTable({ fit, offsetAtV, isStale }: FitTableProps) {
  const U = fit.expandedUncertainty
  const oneK = U && fixed(U.kOffset, 2) === fixed(U.kGain, 2) ? fixed(U.kOffset, 2) : null
  const k = (value: number) => (oneK === null && U ? `, k = ${fixed(value, 2)}` : '')
  const offset = microDecimals(U?.offsetV)
  const gain = ppmDecimals(U?.gainPpm)
  const none = whyNone[fit.dofWhy ?? ''] ?? 'none'
  return (
    <table className={`mt-3 w-full border-collapse text-body ${isStale ? 'text-ink-3' : ''}`}>
      <caption className="sr-only">The fitted line</caption>
      <thead>
        <tr className="border-b border-rule text-small">
          <th scope="col" className="py-1 text-left font-medium">
            Line, {methodWords[fit.method]}
          </th>
          <th scope="col" className="w-[22%] py-1 text-right font-medium">
            value
          </th>
          <th scope="col" className="w-[19%] py-1 text-right font-medium">
            {oneK ? `U, k = ${oneK}` : 'U'}
          </th>
          <th scope="col" className="hidden w-[34%] narrow:table-cell">
            <span className="sr-only">where</span>
          </th>
        </tr>
      </thead>
      <tbody>
        <FitRow
          name="offset error"
          tone={isStale ? '' : 'text-tide'}
          value={`${fixed(fit.offsetErrorV * 1e6, offset, 'always')} µV`}
          U={U ? `${fixed(U.offsetV * 1e6, offset)} µV` : none}
          note={`at ${engineering(offsetAtV, 'V')}${U ? k(U.kOffset) : ''}`}
        />
        <FitRow
          name="gain error"
          tone={isStale ? '' : 'text-copper'}
          value={`${fixed(fit.gainErrorPpm, gain, 'always')} ppm`}
          U={U ? `${fixed(U.gainPpm, gain)} ppm` : none}
          note={`full scale ${fixed(fit.fullScaleErrorV * 1e6, 1, 'always')} µV${U ? k(U.kGain) : ''}`}
        />
        <FitRow
          name="linearity seen"
          tone=""
          value={`${fixed(fit.linearity.maxLsb, 2)} LSB`}
          U=""
          note={
            <>
              at code <Whole value={fit.linearity.atCode} />
            </>
          }
        />
      </tbody>
    </table>
  )
}

type FitRowProps = { name: string; tone: string; value: string; U: string; note: ReactNode }

function FitRow({ name, tone, value, U, note }: FitRowProps) {
  return (
    <tr className="border-b border-hair">
      <th scope="row" className={`h-6 text-left font-semibold ${tone}`}>
        {name}
      </th>
      <td className="text-right">
        <NumberText>{value}</NumberText>
      </td>
      <td className="text-right text-ink-2">
        <NumberText>{U}</NumberText>
      </td>
      <td className="hidden pl-3 text-ink-2 narrow:table-cell">
        {typeof note === 'string' ? <NumberText>{note}</NumberText> : note}
      </td>
    </tr>
  )
}

/** As many decimals as the uncertainty allows: three digits of it. */
function decimalsFor(size: number | undefined): number {
  if (size === undefined || !(size > 0)) return 2
  return Math.max(0, Math.min(4, 2 - Math.floor(Math.log10(size))))
}
const microDecimals = (volts: number | undefined) =>
  decimalsFor(volts === undefined ? undefined : volts * 1e6)
const ppmDecimals = (ppm: number | undefined) => decimalsFor(ppm)
