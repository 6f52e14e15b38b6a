/** Decimals of a volt column: enough that a tenth of an LSB is seen, the same down the column. */
export function voltDecimals(lsbV: number): number {
  return Math.max(0, Math.min(9, Math.ceil(-Math.log10(lsbV)) + 1))
}

type Point = { code: number; idealV: number }

/** One LSB in volts, taken from the record alone: the ideal line goes through its own points. */
export function lsbOf(points: readonly Point[]): number | null {
  let low: Point | undefined
  let high: Point | undefined
  for (const point of points) {
    if (!low || point.code < low.code) low = point
    if (!high || point.code > high.code) high = point
  }
  if (!low || !high || low.code === high.code) return null
  return (high.idealV - low.idealV) / (high.code - low.code)
}
