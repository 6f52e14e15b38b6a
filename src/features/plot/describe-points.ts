import type { PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { codeText, labelDecimals, numberText } from '../../ui/plot/plot-numbers.ts'
import { largest, type PlotPoint, type PlotRange, shownUnit } from './plot-data.ts'

const micro = (volts: number, signed = true): string => {
  const shown = volts * 1e6
  return numberText(shown, labelDecimals(Math.abs(shown)), signed)
}

/** What a screen reader hears of a point. */
export function pointLabel(point: PlotPoint, range: PlotRange): string {
  const bar = point.barV === null ? '' : ` ± ${micro(point.barV, false)} µV`
  const lsb = (volts: number) => numberText(volts / range.lsbV, 2, true)
  const flag = point.flagged ? ', flagged' : ''
  return (
    `Code ${codeText(point.code)}, ideal ${numberText(point.idealV, 6)} V: error ${micro(point.errorV)} µV${bar}, ` +
    `${lsb(point.errorV)} LSB, residual ${lsb(point.residualV)} LSB${flag}`
  )
}

/**
 * The sentence on error bars that every caption carries (U9): what they are, and when they cannot be seen.
 * `longestPx` is what the longest half bar takes on the plot as it stands.
 */
export function barsSentence(
  points: readonly PlotPoint[],
  range: PlotRange,
  bars: string | null,
  marks: 'circles' | 'dots',
  longestPx: number,
): string {
  const longest = largest(points.map((point) => point.barV ?? 0))
  if (bars === null || longest === 0) return 'No error bars: the points carry no uncertainty.'
  if (longestPx >= 3.5) return `Bars: ${bars}.`
  const { name, perVolt } = shownUnit('V', range, longest)
  const shown = longest * perVolt
  return `Bars of ${bars} (at most ${numberText(shown, labelDecimals(shown))} ${name}) are smaller than the ${marks}.`
}

/** The same points as a table: as shown, and as copied with every digit. */
export function pointTable(points: readonly PlotPoint[], range: PlotRange): PlotTableData {
  const ppm = 1e6 / (range.highV - range.lowV)
  const shown = points.map((p) => [
    codeText(p.code),
    numberText(p.idealV, 6),
    numberText(p.errorV * 1e6, 1, true),
    numberText(p.errorV / range.lsbV, 2, true),
    numberText(p.errorV * ppm, 2, true),
    numberText(p.residualV / range.lsbV, 2, true),
    p.barV === null ? 'none' : numberText(p.barV * 1e6, 1),
  ])
  return {
    head: ['code', 'ideal\nV', 'error\nµV', 'error\nLSB', 'error\nppm', 'residual\nLSB', 'bar, ±\nµV'],
    rows: shown,
    csvHead: ['code', 'ideal_v', 'error_v', 'residual_v', 'bar_v'],
    csvRows: points.map((p) => [p.code, p.idealV, p.errorV, p.residualV, p.barV]),
  }
}
