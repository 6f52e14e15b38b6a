import { powerOfTen } from './round.ts'

/** Counts in bars of equal width: bar i holds from + i·width up to, and without, from + (i + 1)·width. */
export type Bars = { from: number; width: number; counts: number[] }

/**
 * A histogram whose bars are round numbers wide and begin at whole multiples of their width.
 * @param values finite; @param most bars wanted at most, over zero
 * @returns null where there is no value
 * Source: common practice (bars of 1, 2 or 5 times a power of ten), no source.
 * @example barsOf([0, 1, 2, 3], 4)?.counts // [1, 1, 1, 1]
 */
export function barsOf(values: readonly number[], most: number): Bars | null {
  if (values.length === 0) return null
  let low = values[0]!
  let high = low
  for (const value of values) {
    low = Math.min(low, value)
    high = Math.max(high, value)
  }
  // Values that are equal but for rounding are one bar.
  const least = Math.max(Math.abs(low), Math.abs(high)) * 1e-12
  const width = roundUp(Math.max((high - low) / most, least) || 1)
  const first = Math.floor(low / width)
  const counts = new Array<number>(Math.floor(high / width) - first + 1).fill(0)
  for (const value of values) {
    const i = Math.floor(value / width) - first
    counts[i] = counts[i]! + 1
  }
  return { from: first * width, width, counts }
}

/** The next of 1, 2, 5 times a power of ten. */
function roundUp(width: number): number {
  const power = powerOfTen(width)
  for (const step of [1, 2, 5]) if (step * power >= width) return step * power
  return 10 * power
}
