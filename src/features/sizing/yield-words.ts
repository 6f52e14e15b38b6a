import type { Histogram } from '../../../shared/solver/yield/types.ts'
import type { PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'

const small = ['no passes', 'one pass', 'two passes', 'three passes', 'four passes']
export const passWord = (passes: number): string => small[passes] ?? `${passes} passes`

export type Bar = { from: number; to: number; count: number; isOver: boolean }

/** The bars with their ends; the last stands for all beyond. */
export function barsOf({ from, width, counts, over }: Histogram): Bar[] {
  const bars = counts.map((count, i) => ({
    from: from + i * width,
    to: from + (i + 1) * width,
    count,
    isOver: false,
  }))
  const end = from + counts.length * width
  return over > 0 ? [...bars, { from: end, to: end, count: over, isOver: true }] : bars
}

export function barSentence({ from, to, count, isOver }: Bar): string {
  const units = `${numberText(count, 0)} units`
  return isOver
    ? `Over ${numberText(from, 2)} LSB: ${units}.`
    : `${numberText(from, 2)} to ${numberText(to, 2)} LSB: ${units}.`
}

export function histogramTable(histogram: Histogram): PlotTableData {
  const bars = barsOf(histogram)
  return {
    head: ['from, LSB', 'to, LSB', 'units'],
    rows: bars.map(({ from, to, count, isOver }) => [
      numberText(from, 2),
      isOver ? 'over' : numberText(to, 2),
      numberText(count, 0),
    ]),
    csvHead: ['from_lsb', 'to_lsb', 'units'],
    csvRows: bars.map(({ from, to, count, isOver }) => [from, isOver ? null : to, count]),
  }
}
