import { OgeeError } from '../errors.ts'
import type { Trimmer } from './adjuster.ts'
import type { ConverterRange } from './converter.ts'
import { refuse } from './network.ts'

/** Changes of the node voltages, V, that null an error line; null for an absent adjuster. */
export type Moves = { gain: number | null; offset: number | null }

/**
 * The exact change of voltage at each node that nulls the line O + G·z.
 * @param offset O in V, gain G as a ratio
 * @throws adjusters-not-independent, adjuster-without-effect
 * Source: solver.md section 5; Cramer's rule on M·[ΔV_o; ΔV_g] = -[O; G].
 * @example exactMoves(gain, null, range, 0, -1e-4).gain // 1e-4 / gain.beta
 */
export function exactMoves(
  gain: Trimmer | null,
  offset: Trimmer | null,
  range: ConverterRange,
  o: number,
  g: number,
): Moves {
  if (gain !== null && offset !== null) {
    const det = determinant(gain, offset)
    return {
      offset: -(gain.beta * o - gain.alpha * g) / det,
      gain: -(offset.alpha * g - offset.beta * o) / det,
    }
  }
  if (gain !== null) return { gain: aloneMove(gain, range, o, g), offset: null }
  if (offset !== null) return { gain: null, offset: aloneMove(offset, range, o, g) }
  return { gain: null, offset: null }
}

/** det M, refused when the two adjusters do the same thing to the line. */
export function determinant(gain: Trimmer, offset: Trimmer): number {
  const det = offset.alpha * gain.beta - gain.alpha * offset.beta
  const row1 = Math.sqrt(offset.alpha * offset.alpha + gain.alpha * gain.alpha)
  const row2 = Math.sqrt(offset.beta * offset.beta + gain.beta * gain.beta)
  if (!(Math.abs(det) > 1e-9 * (row1 * row2))) {
    const message =
      'The two adjusters do the same thing here; they cannot be told apart (determinant under 1e-9). Change one effect.'
    throw new OgeeError('adjusters-not-independent', message, {
      errors: [{ path: '/adjusters', message }],
    })
  }
  return det
}

/** The place where a lone adjuster nulls the error: gain at z_F, offset at z = 0. */
export function nullingPoint(trimmer: Trimmer, range: ConverterRange): number {
  return trimmer.which === 'gain' ? range.zGain : 0
}

/** The move of one adjuster alone. */
export function aloneMove(trimmer: Trimmer, range: ConverterRange, o: number, g: number): number {
  const z = nullingPoint(trimmer, range)
  const lever = effectAt(trimmer, z)
  if (lever === 0) {
    refuse(
      'adjuster-without-effect',
      trimmer.which,
      'effect',
      'it has no effect at the point that it must null.',
    )
  }
  return -(o + g * z) / lever
}

/** α + β·z, zero when it is zero but for rounding. */
export function effectAt(trimmer: Trimmer, z: number): number {
  const sum = trimmer.alpha + trimmer.beta * z
  const small = 1e-12 * (Math.abs(trimmer.alpha) + Math.abs(trimmer.beta * z))
  return Math.abs(sum) < small ? 0 : sum
}
