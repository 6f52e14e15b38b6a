/** Pooled variance of readings (solver.md section 2). */
export type Pooled = {
  /** s_p², V². 0 when dof is 0. */
  variance: number
  /** Σ(m_i - 1). */
  dof: number
  /** Every point has readings. */
  complete: boolean
}

/**
 * Pools the scatter of readings over all points: s_p² = Σ(m_i - 1)s_i²/Σ(m_i - 1).
 * @param lists readings of each point in volts, null where a point has none
 * Source: NIST/SEMATECH e-Handbook of Statistical Methods, pooled standard deviation.
 * @example pooledReadings([[1, 3], [5, 5]]) // { variance: 1, dof: 2, complete: true }
 */
export function pooledReadings(lists: readonly (readonly number[] | null)[]): Pooled {
  let sum = 0
  let dof = 0
  let complete = true
  for (const list of lists) {
    if (list === null || list.length === 0) {
      complete = false
      continue
    }
    sum += squaresAboutMean(list)
    dof += list.length - 1
  }
  return { variance: dof > 0 ? sum / dof : 0, dof, complete }
}

/** Σ(v - mean)², two passes; exactly 0 for equal values. */
function squaresAboutMean(list: readonly number[]): number {
  const first = list[0]!
  let shift = 0
  for (const value of list) shift += value - first
  shift /= list.length
  let squares = 0
  for (const value of list) {
    const d = value - first - shift
    squares += d * d
  }
  return squares
}
