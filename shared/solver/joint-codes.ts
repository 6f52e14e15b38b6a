import type { Trimmer } from './adjuster.ts'
import { nodeV } from './network.ts'

/** The error at the two ends before the move, and the voltages it is measured with. Volts. */
export type Start = {
  errorLow: number
  errorFull: number
  gainV: number
  offsetV: number
}

/** Within two codes of the exact value; the billionth keeps a code at exactly two whatever the division rounds to. */
const NEAR = 2 + 1e-9

export type Pair = { gain: number; offset: number }

/**
 * The code nearest to an exact node voltage, ties to the smaller code, among the allowed ones within two codes of it;
 * null when there is none.
 * @example nearestTrimCode(gain, gain.v0) // 0
 */
export function nearestTrimCode(trimmer: Trimmer, exactV: number): number | null {
  const k = (exactV - trimmer.v0) / trimmer.stepV
  const whole = Math.floor(k)
  let code = k - whole > 0.5 ? whole + 1 : whole
  if (code < trimmer.firstCode) code = trimmer.firstCode
  if (code > trimmer.lastCode) code = trimmer.lastCode
  const allowed = trimmer.firstCode <= trimmer.lastCode
  return allowed && code - k <= NEAR && k - code <= NEAR ? code : null
}

/** Best pair so far; a plain object that the search writes to, so that nothing is allocated in the loop. */
type Best = { found: boolean; larger: number; smaller: number; gain: number; offset: number }

/**
 * The pair of codes with the smallest error at the ends of the range, chosen jointly.
 * @param start errors at both ends and the applied voltages
 * @param gainExact exact node voltages that null the line
 * @returns the pair with the least (larger |end|, smaller |end|, gain code, offset code), or null when no allowed code
 *   is near
 * Source: solver.md section 5. For a code of one adjuster the ends are straight lines in the other's code, so the best
 * code stands next to a zero of an end or next to where the two ends are opposite or equal.
 */
export function jointCodes(
  gain: Trimmer,
  offset: Trimmer,
  start: Start,
  gainExact: number,
  offsetExact: number,
): Pair | null {
  const kg = (gainExact - gain.v0) / gain.stepV
  const ko = (offsetExact - offset.v0) / offset.stepV
  const best: Best = { found: false, larger: 0, smaller: 0, gain: 0, offset: 0 }
  for (let g = Math.ceil(kg - NEAR); g <= kg + NEAR; g++) {
    if (g >= gain.firstCode && g <= gain.lastCode) alongOffset(gain, offset, start, g, ko, best)
  }
  for (let o = Math.ceil(ko - NEAR); o <= ko + NEAR; o++) {
    if (o >= offset.firstCode && o <= offset.lastCode) alongGain(gain, offset, start, o, kg, best)
  }
  return best.found ? { gain: best.gain, offset: best.offset } : null
}

/** e_L = (e_L + E_oL·ΔV_o) + E_gL·ΔV_g, and e_F likewise: the order of the sums is part of the contract. */
function consider(gain: Trimmer, offset: Trimmer, start: Start, g: number, o: number, best: Best): void {
  if (g < gain.firstCode || g > gain.lastCode || o < offset.firstCode || o > offset.lastCode) return
  const dg = nodeV(gain, g) - start.gainV
  const d = nodeV(offset, o) - start.offsetV
  const low = Math.abs(start.errorLow + offset.endLow * d + gain.endLow * dg)
  const full = Math.abs(start.errorFull + offset.endFull * d + gain.endFull * dg)
  const larger = Math.max(low, full)
  const smaller = Math.min(low, full)
  if (best.found) {
    const order = larger - best.larger || smaller - best.smaller || g - best.gain || o - best.offset
    if (order >= 0) return
  }
  best.found = true
  best.larger = larger
  best.smaller = smaller
  best.gain = g
  best.offset = o
}

function alongOffset(gain: Trimmer, offset: Trimmer, start: Start, g: number, ko: number, best: Best): void {
  for (let o = Math.ceil(ko - NEAR); o <= ko + NEAR; o++) consider(gain, offset, start, g, o, best)
  const dg = nodeV(gain, g) - start.gainV
  const low = start.errorLow + gain.endLow * dg
  const full = start.errorFull + gain.endFull * dg
  for (let i = 0; i < 4; i++) {
    const o = turningCode(offset, start.offsetV, low, full, i)
    farther(gain, offset, start, g, inside(offset, o), ko, best)
    farther(gain, offset, start, g, inside(offset, o + 1), ko, best)
  }
}

/** As `consider`, for an offset code outside the window that the loop before has tried. */
function farther(
  gain: Trimmer,
  offset: Trimmer,
  start: Start,
  g: number,
  o: number,
  ko: number,
  best: Best,
): void {
  if (o < ko - NEAR || o > ko + NEAR) consider(gain, offset, start, g, o, best)
}

/** The window itself was tried along offset; here only what lies outside it. */
function alongGain(gain: Trimmer, offset: Trimmer, start: Start, o: number, kg: number, best: Best): void {
  const d = nodeV(offset, o) - start.offsetV
  const low = start.errorLow + offset.endLow * d
  const full = start.errorFull + offset.endFull * d
  for (let i = 0; i < 4; i++) {
    const below = turningCode(gain, start.gainV, low, full, i)
    for (let code = below; code <= below + 1; code++) {
      const g = inside(gain, code)
      if (g < kg - NEAR || g > kg + NEAR) consider(gain, offset, start, g, o, best)
    }
  }
}

/**
 * The allowed code nearest to a turning point. The larger end falls towards its turning point, so where that lies beyond
 * the last code, the last code is the best on its line: leaving it out would give a pair with a better neighbour.
 */
function inside(trimmer: Trimmer, code: number): number {
  return Math.min(Math.max(code, trimmer.firstCode), trimmer.lastCode)
}

/**
 * The code just below the voltage that nulls the low end (0), nulls full scale (1), makes the ends opposite (2) or
 * equal (3); the first code where this adjuster cannot.
 */
function turningCode(trimmer: Trimmer, nowV: number, low: number, full: number, which: number): number {
  const { endLow, endFull } = trimmer
  const error = which === 0 ? low : which === 1 ? full : which === 2 ? low + full : low - full
  const lever =
    which === 0 ? endLow : which === 1 ? endFull : which === 2 ? endLow + endFull : endLow - endFull
  if (lever === 0) return trimmer.firstCode
  return Math.floor((nowV - error / lever - trimmer.v0) / trimmer.stepV)
}
