/** A seeded generator for tests (mulberry32, public domain): every random run prints its seed and repeats from it. */
export type Random = { next: () => number; below: (n: number) => number; pick: <T>(items: readonly T[]) => T }

export function seededRandom(seed: number): Random {
  let state = seed >>> 0
  const next = () => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = state
    t = Math.imul(t ^ (t >>> 15), t | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
  const below = (n: number) => Math.floor(next() * n)
  return { next, below, pick: (items) => items[below(items.length)]! }
}

/** The seed of this run: `OGEE_SEED`, or a new one; printed when the test fails by being part of its message. */
export function runSeed(): number {
  const given = process.env.OGEE_SEED
  return given === undefined ? Math.floor(Math.random() * 2 ** 31) : Number(given)
}
