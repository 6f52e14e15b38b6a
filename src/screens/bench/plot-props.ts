import type { Point } from '../../../shared/contract/point.ts'
import type { ConverterRange } from '../../../shared/solver/converter.ts'
import type { FitResult, TrimResult, VerifyResult } from '../../../shared/solver/types.ts'
import type { Bench } from '../../features/bench/solve.ts'
import type { PlotLine, PlotPoint, PlotRange } from '../../features/plot/plot-data.ts'
import { engineering } from '../../ui/number-format.ts'

/** From the solver's results to what the plots draw. */

export const plotRange = (range: ConverterRange): PlotRange => ({
  lowV: range.lowV,
  highV: range.lowV + range.fsrV,
  lsbV: range.lsbV,
})

export function plotPoints(fit: FitResult, bars: VerifyResult | null): PlotPoint[] {
  const flagged = new Set(fit.flags.map((flag) => flag.code))
  return fit.residuals.map((point, index) => {
    const judged = bars?.points[index]
    const isSame = judged?.code === point.code && judged.measuredV === point.measuredV
    return {
      code: point.code,
      idealV: point.idealV,
      errorV: point.errorV,
      residualV: point.residualV,
      barV: isSame ? judged.expandedUncertaintyV : null,
      flagged: flagged.has(point.code),
    }
  })
}

type LineLike = { offsetErrorV: number; gainErrorPpm: number }

export const plotLine = (line: LineLike, range: ConverterRange): PlotLine => ({
  offsetV: line.offsetErrorV,
  slope: line.gainErrorPpm / 1e6,
  pivotV: range.x0,
})

/** The lines at both ends of what the adjuster out of reach can null, from where it stands. */
export function reachLines(trim: TrimResult, bench: Bench): readonly [PlotLine, PlotLine] | null {
  const { range } = bench.channel
  for (const which of ['gain', 'offset'] as const) {
    const trimmer = bench.trim?.trimmers[which]
    if (!trimmer || trim.shortfall?.[which] === undefined) continue
    const now = trim.appliedNodeV[which] ?? trimmer.nominalV
    const nulled = (nodeV: number): PlotLine => ({
      offsetV: -trimmer.alpha * (nodeV - now),
      slope: -trimmer.beta * (nodeV - now),
      pivotV: range.x0,
    })
    return [nulled(trimmer.nominalV - trimmer.reachDown), nulled(trimmer.nominalV + trimmer.reachUp)]
  }
  return null
}

/** What the bars are; every caption says it. Null when the points carry no uncertainty. */
export function barsText(
  points: readonly Point[],
  fit: FitResult,
  noiseV: number | undefined,
): string | null {
  const parts: string[] = []
  if (points.length > 0 && points.every((point) => point.uncertainty !== undefined))
    parts.push('the stated u')
  else if (points.some((point) => (point.readings?.length ?? 0) > 1))
    parts.push('the scatter of the readings')
  else if (noiseV !== undefined) parts.push('the noise stated in the design')
  else return null
  const { instrument } = fit
  if (instrument) {
    parts.push(`instrument limits ${instrument.gainPpm} ppm and ${engineering(instrument.offsetV, 'V')}`)
  }
  return `expanded uncertainty U, 95 %, of ${parts.join(' and ')}`
}
