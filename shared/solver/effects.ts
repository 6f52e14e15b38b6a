import type { ConverterRange } from './converter.ts'
import { positive, refuse } from './network.ts'
import type { Adjuster, Effect, Range, Which } from './types.ts'

/** What one volt at an adjust node does to the output: (α + β·z) V/V. α `offsetPerV` in V/V, β `slopePerV` in 1/V. */
export type Slopes = { offsetPerV: number; slopePerV: number }

/**
 * The effect of an adjuster on a range: measured, or from the circuit; a range's own effect goes before the adjuster's.
 * @throws effect-zero, resistance-not-positive, reference-zero, not-finite
 * Source: solver.md section 4; first-order circuit theory of an inverting summing amplifier.
 * @example effectOf(unipolar18.adjusters.offset, undefined, range, 'offset').offsetPerV // -10000 / 1000000
 */
export function effectOf(
  adjuster: Adjuster,
  designRange: Range | undefined,
  range: ConverterRange,
  which: Which,
): Slopes {
  const effect = designRange?.effects?.[which] ?? adjuster.effect
  const slopes = slopesOf(effect, range, which)
  if (!Number.isFinite(slopes.offsetPerV) || !Number.isFinite(slopes.slopePerV)) {
    refuse('not-finite', which, 'effect', 'its effect is not a finite number.')
  }
  if (slopes.offsetPerV === 0 && slopes.slopePerV === 0) {
    refuse('effect-zero', which, 'effect', 'it moves neither offset nor slope. Give slopePerV or offsetPerV.')
  }
  return slopes
}

function slopesOf(effect: Effect, range: ConverterRange, which: Which): Slopes {
  if (effect.kind === 'measured') {
    return { offsetPerV: effect.offsetPerV, slopePerV: effect.slopePerV }
  }
  const sign = effect.inverting ? -1 : 1
  const adjust = positive(effect.adjustOhm, which, 'effect/adjustOhm')
  if (effect.kind === 'output-summing') {
    const feedback = positive(effect.feedbackOhm, which, 'effect/feedbackOhm')
    return { offsetPerV: (sign * feedback) / adjust, slopePerV: 0 }
  }
  const input = positive(effect.inputOhm, which, 'effect/inputOhm')
  if (effect.referenceV === 0) {
    refuse('reference-zero', which, 'effect/referenceV', 'the reference voltage cannot be 0 V.')
  }
  const slopePerV = (sign * (input / adjust)) / effect.referenceV
  // + 0: a pivot at the offset point would give -0 under an inverting adjuster.
  return { offsetPerV: slopePerV * (range.x0 - (effect.pivotV ?? 0)) + 0, slopePerV }
}
