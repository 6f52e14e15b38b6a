/**
 * Keeps the last results of a pure function of (tail, dof): in a lot of units the same two or three quantiles are
 * asked for again and again. Changes no result, only the time.
 */
export function remember(f: (tail: number, dof: number) => number): (tail: number, dof: number) => number {
  const byTail = new Map<number, Map<number, number>>()
  return (tail, dof) => {
    let byDof = byTail.get(tail)
    if (byDof === undefined) {
      if (byTail.size >= 64) byTail.clear()
      byDof = new Map()
      byTail.set(tail, byDof)
    }
    let value = byDof.get(dof)
    if (value === undefined) {
      if (byDof.size >= 256) byDof.clear()
      value = f(tail, dof)
      byDof.set(dof, value)
    }
    return value
  }
}
