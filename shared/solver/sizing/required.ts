import type { Trimmer } from '../adjuster.ts'
import type { ConverterRange } from '../converter.ts'
import { powerOfTwo } from '../distribution/elementary.ts'
import { SLACK } from './bits.ts'
import { sums, type Term, type Terms } from './budget.ts'
import { centreOf } from './extents.ts'
import type { Row } from './nulling.ts'
import type { Span } from './types.ts'

/** What the error extents ask of an adjuster's node, V. */
export type Reach = {
  /** About nominal, before margin and effect tolerance. */
  centre: number
  size: number
  lowV: number
  highV: number
}

/**
 * The node voltages that an adjuster must reach: centre ± (1 + margin)·size about nominal, each end widened by the effect's
 * tolerance.
 * @param terms what must be trimmed away; @param row of `nullingRow`
 * @param margin 0.25 for a quarter more
 * @returns volts at the node
 * Source: solver.md section 6.
 */
export function requiredReach(
  trimmer: Trimmer,
  range: ConverterRange,
  terms: Terms,
  row: Row,
  combine: 'worst-case' | 'rss',
  margin: number,
): Reach {
  // A gain line turns the output about its pivot, so it moves the offset point too: one error, both ways at once.
  const ofGain = (term: Term) => (row.o * (range.x0 - term.pivotV) + row.g) / 1e6
  const ofOffset = () => row.o
  const gain = sums(terms.gain, ofGain)
  const offset = sums(terms.offset, ofOffset)
  const worst = offset.worst + gain.worst
  const size = combine === 'rss' ? Math.min(rootSum(terms, ofGain, row.o), worst) : worst
  const centre = -(centreOf(terms.offset, ofOffset) + centreOf(terms.gain, ofGain)) + 0
  const reach = (1 + margin) * size
  const low = centre - reach
  const high = centre + reach
  const { tolerance: t, nominalV } = trimmer
  return {
    centre,
    size,
    lowV: nominalV + (low < 0 ? low / (1 - t) : low / (1 + t)),
    highV: nominalV + (high > 0 ? high / (1 - t) : high / (1 + t)),
  }
}

/** 2·√Σu² over the terms of both kinds. */
function rootSum(terms: Terms, ofGain: (term: Term) => number, o: number): number {
  let squares = 0
  for (const term of terms.offset) squares += o * term.u * (o * term.u)
  for (const term of terms.gain) {
    const u = ofGain(term) * term.u
    squares += u * u
  }
  return 2 * Math.sqrt(squares)
}

/**
 * The even resolution from 8 to 20 bits that is not under `bits`, and the span of such a part at the node: code 0 to the
 * voltage that code 2^bits would give. Null over 20 bits, and where nothing is to be reached.
 * @param stepV the step that the target allows
 * Source: solver.md section 6.
 * @example recommend(-0.3, 0.3, 10, 0.001)?.highV // 0.3 * 1024/1022
 */
export function recommend(lowV: number, highV: number, bits: number | null, stepV: number): Span | null {
  const spanV = highV - lowV
  if (bits === null || bits > 20 || !(spanV > 0)) return null
  const even = Math.max(8, bits + (bits % 2))
  const count = powerOfTwo(even)
  const half = (highV - lowV) / 2
  const symmetric = Math.abs(lowV + highV) <= SLACK * half
  // A symmetric part wastes its lowest code; where the step has no room for that, the span starts at the low end.
  if (symmetric && spanV <= stepV * (count - 2) * (1 + SLACK)) {
    const end = (half * count) / (count - 2)
    return { bits: even, lowV: -end, highV: end }
  }
  return { bits: even, lowV, highV: lowV + (spanV * count) / (count - 1) }
}
