/** One line of the table: ours and its peer in the same unit and run; `ratio` is what the goal speaks of. */
export type BenchRow = {
  /** Of quality.md: P1, P3 … */
  id: string
  name: string
  ours: string
  peer: string
  ratio: number
  goal: string
  met: boolean
}

/** The middle value. */
export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b)
  const middle = Math.floor(sorted.length / 2)
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2
}
