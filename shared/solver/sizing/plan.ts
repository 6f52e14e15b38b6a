import type { Channel } from '../channel.ts'
import { idealV } from '../converter.ts'
import type { Line } from '../line.ts'

/**
 * How well the plan of measurement knows the error line: variances of offset and slope from u = noiseV/√readings of each
 * point, by the plan's method. Null when the plan states no noise or has fewer than two codes.
 * A best straight line in the minimax sense rests on its outermost codes; it is taken like the terminal line.
 * Source: solver.md sections 3 and 6.
 * @example planVariance(channel, unipolar18.measurement.points) // null
 */
export function planVariance(channel: Channel, codes: readonly number[]): Line['variance'] {
  const { noiseV, readings } = channel.noise
  if (noiseV === null || codes.length < 2) return null
  const u2 = (noiseV * noiseV) / readings
  const z = codes.map((code) => idealV(channel.range, code) - channel.range.x0)
  return channel.method === 'best-fit' ? ofBestFit(z, u2) : ofEnds(z, u2)
}

function ofBestFit(z: readonly number[], u2: number): Line['variance'] {
  let mean = 0
  for (const value of z) mean += value
  mean /= z.length
  let s = 0
  for (const value of z) s += (value - mean) * (value - mean)
  if (!(s > 0)) return null
  return { offset: u2 * (1 / z.length + (mean * mean) / s), gain: u2 / s, cov: (-mean / s) * u2 }
}

function ofEnds(z: readonly number[], u2: number): Line['variance'] {
  let low = z[0]!
  let high = z[0]!
  for (const value of z) {
    if (value < low) low = value
    if (value > high) high = value
  }
  if (!(high > low)) return null
  const replicates = (end: number) => z.filter((value) => value === end).length
  const l2 = u2 / replicates(low)
  const h2 = u2 / replicates(high)
  const d2 = (high - low) * (high - low)
  return {
    offset: (high * high * l2 + low * low * h2) / d2,
    gain: (l2 + h2) / d2,
    cov: -(high * l2 + low * h2) / d2,
  }
}
