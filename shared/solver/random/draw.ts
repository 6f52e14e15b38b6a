import { ln } from '../distribution/elementary.ts'
import type { Random } from './generator.ts'

export type Distribution = 'rectangular' | 'triangular' | 'arcsine' | 'normal'

/** Said in results of simulations: a change of either is a new solver version. */
export const NORMAL_METHOD = 'polar (Marsaglia and Bray), second value dropped'

/** Uniform in [-1, 1). */
export const either = (random: Random): number => 2 * random() - 1

/** Standard normal, by the polar method (Marsaglia and Bray, 1964); the second value of a pair is not kept. */
export function normal(random: Random): number {
  for (;;) {
    const u = either(random)
    const v = either(random)
    const s = u * u + v * v
    if (s > 0 && s < 1) return u * Math.sqrt((-2 * ln(s)) / s)
  }
}

/** Arcsine on [-1, 1]: the cosine of twice the angle of a point drawn uniformly in the unit disc. */
function arcsine(random: Random): number {
  for (;;) {
    const u = either(random)
    const v = either(random)
    const s = u * u + v * v
    if (s > 0 && s < 1) return (u * u - v * v) / s
  }
}

/**
 * One value of a budget line about zero, in the unit of `limit`. A normal line's limit is k standard deviations and is
 * no bound.
 */
export function draw(
  random: Random,
  line: { distribution: Distribution; k?: number | undefined },
  limit: number,
): number {
  switch (line.distribution) {
    case 'rectangular':
      return limit * either(random)
    case 'triangular':
      return limit * (random() - random())
    case 'arcsine':
      return limit * arcsine(random)
    case 'normal':
      return (limit / (line.k ?? 1)) * normal(random)
  }
}
