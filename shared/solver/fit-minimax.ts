import type { Line } from './line.ts'
import type { PointSet } from './points.ts'

type Spot = { z: number; e: number }
type Triple = { i: number; j: number; k: number; deviation: number }

/**
 * The best straight line in the IEC/JEDEC sense: the smallest largest deviation at the codes measured.
 * @returns offset in V, gain as a ratio; no variances
 * Source: solver.md section 3; de la Vallée Poussin: the best line is that of the triple with the largest equal
 * deviation, and such a triple stands on an edge of the convex hull.
 * @example fitMinimax(set).variance // null
 */
export function fitMinimax(points: PointSet): Line {
  const spots = averaged(points)
  const { offset, gain } = bestLine(spots)
  return { offset, gain, variance: null, dof: 0, dofWhy: 'minimax', chiSquared: null, note: null }
}

/** Replicates are averaged first: one spot a code, in code order. */
function averaged(points: PointSet): Spot[] {
  const spots: Spot[] = []
  for (let i = 0; i < points.n; ) {
    const code = points.codes[i]
    const z = points.z[i]!
    let sum = 0
    let m = 0
    for (; i < points.n && points.codes[i] === code; i++, m++) sum += points.e[i]!
    spots.push({ z, e: sum / m })
  }
  return spots
}

/** The line with the smallest largest |deviation| from spots in order of z, at least two. */
export function bestLine(spots: readonly Spot[]): { offset: number; gain: number } {
  const first = spots[0]!
  if (spots.length === 2) return through(first, spots[1]!, 0)
  let best: Triple | null = null
  for (const side of [1, -1]) {
    const edge = hull(spots, side)
    for (let h = 0; h + 1 < edge.length; h++) {
      for (let j = edge[h]! + 1; j < edge[h + 1]!; j++) {
        best = better(best, triple(spots, edge[h]!, j, edge[h + 1]!))
      }
    }
  }
  // All spots on both hulls is impossible for three spots or more, so a triple was found.
  const { i, k, deviation } = best!
  return through(spots[i]!, spots[k]!, deviation)
}

/** Indexes of the lower (side 1) or upper (side -1) convex hull, left to right; points on an edge are left out. */
function hull(spots: readonly Spot[], side: number): number[] {
  const edge: number[] = []
  for (let p = 0; p < spots.length; p++) {
    const c = spots[p]!
    while (edge.length > 1) {
      const a = spots[edge[edge.length - 2]!]!
      const b = spots[edge[edge.length - 1]!]!
      const turn = (b.z - a.z) * (c.e - a.e) - (c.z - a.z) * (b.e - a.e)
      if (turn * side > 0) break
      edge.pop()
    }
    edge.push(p)
  }
  return edge
}

/** The equal deviation of three spots: half of what the middle one stands off the chord. */
function triple(spots: readonly Spot[], i: number, j: number, k: number): Triple {
  const a = spots[i]!
  const c = spots[k]!
  const b = spots[j]!
  const chord = a.e + ((c.e - a.e) / (c.z - a.z)) * (b.z - a.z)
  return { i, j, k, deviation: (b.e - chord) / 2 }
}

/** The larger deviation; of equals the first in code order. */
function better(best: Triple | null, next: Triple): Triple {
  if (best === null) return next
  const more = Math.abs(next.deviation) - Math.abs(best.deviation)
  if (more !== 0) return more > 0 ? next : best
  return next.i - best.i || next.j - best.j || next.k - best.k ? firstOf(best, next) : best
}

function firstOf(a: Triple, b: Triple): Triple {
  return (a.i - b.i || a.j - b.j || a.k - b.k) <= 0 ? a : b
}

/** The chord of two spots, moved by the deviation. */
function through(a: Spot, b: Spot, deviation: number): { offset: number; gain: number } {
  const gain = (b.e - a.e) / (b.z - a.z)
  const near = Math.abs(a.z) <= Math.abs(b.z) ? a : b
  return { offset: near.e - gain * near.z + deviation, gain }
}
