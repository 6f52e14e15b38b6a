import { powerOfTwo } from '../distribution/elementary.ts'
import type { Which } from '../types.ts'
import { log2, SLACK } from './bits.ts'
import type { SizeResult, SizeVerdict } from './types.ts'

/** One bit of the auxiliary DAC, as volts at the output. */
export type Rung = {
  bit: number
  outputV: number
  lsb: number
  ppm: number
  /** The demand uses it; it is to spare; it would be there if the part had it. */
  kind: 'needed' | 'spare' | 'missing'
}

/** The trim ladder of one adjuster as numbers: volts at the output, bits, no pixels. */
export type Ladder = {
  which: Which
  state: SizeVerdict
  /** The part's own rungs from bit 0 up, then missing ones: bits under 0 below, over the part's above. */
  rungs: Rung[]
  /** The step, and the reach on the tighter side. */
  stepV: number
  reachV: number
  /** What target (bottom) and budget (top) demand; null when the budget asks nothing. */
  bracket: { bottomV: number; topV: number } | null
  /** Bits that the bracket sticks out above or below; 0 where it does not. */
  shortBits: number
  coarseBits: number
  /** Bits to spare above and below; 0 where there are none. */
  spareAboveBits: number
  spareBelowBits: number
}

/**
 * The ladder of an adjuster; null when the design has none.
 * @param result of `sizeDesign`; @param fsrV full-scale range, for ppm
 * Source: design of the trim ladder: each rung is step·2^bit at the output; a filled rung is one that the demand uses.
 * @example ladderOf(size, 'gain', 10)?.rungs.filter(({ kind }) => kind === 'needed').length // 10
 */
export function ladderOf(result: SizeResult, which: Which, fsrV: number): Ladder | null {
  const size = result.adjusters[which]
  if (size === undefined) return null
  const stepV = size.available.outputStepV
  const allowedV = size.requiredStepV * size.outputPerV
  const neededV = size.requiredReachOutputV
  const reachV = size.availableReachOutputV
  const asks = neededV > 0
  const rung = (bit: number, kind: Rung['kind']): Rung => {
    const outputV = stepV * powerOfTwo(bit)
    return { bit, outputV, lsb: outputV / result.lsbV, ppm: (outputV / fsrV) * 1e6, kind }
  }
  const rungs: Rung[] = []
  const { bits } = size.available
  for (let bit = 0; bit < bits; bit++) {
    const v = stepV * powerOfTwo(bit)
    const below = 2 * v <= allowedV * (1 + SLACK)
    const above = v / 2 >= neededV * (1 - SLACK)
    rungs.push(rung(bit, asks && !below && !above ? 'needed' : 'spare'))
  }
  const coarseBits = size.stepMargin * (1 + SLACK) < 1 ? -size.stepSpareBits : 0
  const short = asks && reachV < neededV * (1 - SLACK)
  const shortBits = short && reachV > 0 ? log2(neededV / reachV) : 0
  for (let bit = -1; asks && bit > -64 && 2 * stepV * powerOfTwo(bit) > allowedV * (1 + SLACK); bit--) {
    rungs.push(rung(bit, 'missing'))
  }
  for (
    let bit = bits;
    short && bit < bits + 64 && (stepV * powerOfTwo(bit)) / 2 < neededV * (1 - SLACK);
    bit++
  ) {
    rungs.push(rung(bit, 'missing'))
  }
  return {
    which,
    state: size.verdict,
    rungs,
    stepV,
    reachV,
    bracket: asks ? { bottomV: Math.min(allowedV, neededV), topV: neededV } : null,
    shortBits,
    coarseBits,
    spareAboveBits: asks && reachV > 0 && !short ? log2(reachV / neededV) : 0,
    spareBelowBits: coarseBits > 0 ? 0 : size.stepSpareBits,
  }
}

/** The axis that several ladders share: ends in volts at the output, and what to write at it. */
export type LadderAxis = {
  bottomV: number
  topV: number
  volts: { value: number; major: boolean }[]
  /** Powers of two of an LSB, by exponent. */
  lsb: { exponent: number; value: number }[]
  /** Decades of ppm of FSR. */
  ppm: { value: number; outputV: number }[]
}

/**
 * An axis that holds every rung, bracket and rail end with room for half an octave at both ends; without a ladder one
 * from a sixteenth of an LSB to 1024 LSB.
 * @example ladderAxis([], 1, 16).bottomV // 0.0625
 */
export function ladderAxis(ladders: readonly Ladder[], lsbV: number, fsrV: number): LadderAxis {
  let low = Number.POSITIVE_INFINITY
  let high = 0
  for (const { rungs, reachV, bracket } of ladders) {
    for (const v of [
      ...rungs.map(({ outputV }) => outputV),
      reachV,
      bracket?.bottomV ?? 0,
      bracket?.topV ?? 0,
    ]) {
      if (v > 0 && v < low) low = v
      if (v > high) high = v
    }
  }
  const bottomV = high > 0 ? low / Math.SQRT2 : lsbV / 16
  const topV = high > 0 ? high * Math.SQRT2 : lsbV * 1024
  return {
    bottomV,
    topV,
    volts: oneTwoFive(bottomV, topV),
    lsb: powersOfTwo(bottomV / lsbV, topV / lsbV).map((exponent) => ({
      exponent,
      value: powerOfTwo(exponent),
    })),
    ppm: oneTwoFive((bottomV / fsrV) * 1e6, (topV / fsrV) * 1e6)
      .filter(({ major }) => major)
      .map(({ value }) => ({ value, outputV: (value * fsrV) / 1e6 })),
  }
}

/**
 * Height of a voltage above the bottom of the axis, in octaves.
 * @example octavesAbove(4e-6, 1e-6) // 2
 */
export function octavesAbove(outputV: number, bottomV: number): number {
  return log2(outputV / bottomV)
}

function oneTwoFive(low: number, high: number): { value: number; major: boolean }[] {
  const ticks: { value: number; major: boolean }[] = []
  // From 1e-15 up: under and over that no axis of a converter goes.
  for (let exponent = -15; exponent <= 9; exponent++) {
    for (const digit of [1, 2, 5]) {
      const value = Number(`${digit}e${exponent}`)
      if (value >= low && value <= high) ticks.push({ value, major: digit === 1 })
    }
  }
  return ticks
}

function powersOfTwo(low: number, high: number): number[] {
  const exponents: number[] = []
  for (let exponent = -40; exponent <= 40; exponent++) {
    const value = powerOfTwo(exponent)
    if (value >= low && value <= high) exponents.push(exponent)
  }
  return exponents
}
