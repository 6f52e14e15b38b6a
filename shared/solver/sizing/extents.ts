import { OgeeError } from '../../errors.ts'
import type { ConverterRange } from '../converter.ts'
import { sums, type Term, type Terms, toReach } from './budget.ts'
import type { Extents, MeasuredUnits } from './types.ts'

/** What must be trimmed away, as terms for the reach and as the numbers to show. */
export type ToTrim = { terms: Terms; extents: Extents }

/**
 * How far gain and offset errors may lie from ideal, by the budget's initial and drift lines.
 * @param terms the budget's lines
 * @param combine which sum is used
 * @returns centre, worst case, RSS and the one used; ppm and V; offset lines only under `offset` (what gain lines turned
 *   elsewhere than at the offset point add to it enters the reach by its own term)
 * Source: solver.md section 6.
 * @example extentsFromBudget(budgetTerms(unipolar18), 'worst-case').extents.gain.usedPpm // 390
 */
export function extentsFromBudget(terms: Terms, combine: 'worst-case' | 'rss'): ToTrim {
  const reach = { gain: toReach(terms.gain), offset: toReach(terms.offset) }
  return {
    terms: reach,
    extents: extentsOf(reach, combine, { from: 'budget', units: null, toleranceFactor: null }),
  }
}

/**
 * As `extentsFromBudget`, with measured units in the place of the initial lines: mean ± k·s by the tolerance factor.
 * The budget's drift lines stay, for fresh units know nothing of drift.
 * @param measured at least two units, with nothing loaded, as `measuredUnits` makes it
 * @throws not-finite
 * Source: solver.md section 6; NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.6.3.
 * @example extentsFromUnits(terms, 'worst-case', range, units).extents.units // 3
 */
export function extentsFromUnits(
  terms: Terms,
  combine: 'worst-case' | 'rss',
  range: ConverterRange,
  { errors, factor: k }: MeasuredUnits,
): ToTrim {
  const drift = (list: readonly Term[]) => list.filter(({ when }) => when === 'drift')
  const gain = spread(errors.map(({ gainErrorPpm }) => gainErrorPpm))
  const offset = spread(errors.map(({ offsetErrorV }) => offsetErrorV))
  const term = ({ mean, s }: Spread, pivotV: number): Term => ({
    name: 'Measured units',
    when: 'initial',
    limit: k * s,
    // Half of the interval: twice the root of the squares then gives mean ± k·s back.
    u: (k * s) / 2,
    nominal: mean,
    pivotV,
  })
  const reach = {
    // A fit reads the slope about the offset point, so the output turns there.
    gain: [term(gain, range.x0), ...drift(terms.gain)],
    offset: [term(offset, 0), ...drift(terms.offset)],
  }
  const head = { from: 'measured-units', units: errors.length, toleranceFactor: k } as const
  return { terms: reach, extents: extentsOf(reach, combine, head) }
}

type Spread = { mean: number; s: number }

/** Mean and standard deviation, about the first value so that equal values have exactly that mean and no spread. */
function spread(values: readonly number[]): Spread {
  const first = values[0]!
  let shift = 0
  for (const value of values) {
    if (!Number.isFinite(value))
      throw new OgeeError('not-finite', 'An error of a measured unit is not a finite number.')
    shift += value - first
  }
  shift /= values.length
  let squares = 0
  for (const value of values) squares += (value - first - shift) * (value - first - shift)
  return { mean: first + shift, s: Math.sqrt(squares / (values.length - 1)) }
}

function extentsOf(
  terms: Terms,
  combine: 'worst-case' | 'rss',
  head: Pick<Extents, 'from' | 'units' | 'toleranceFactor'>,
): Extents {
  const gain = sums(terms.gain)
  const offset = sums(terms.offset)
  const used = ({ worst, rss }: { worst: number; rss: number }) => (combine === 'rss' ? rss : worst)
  return {
    gain: {
      centrePpm: centreOf(terms.gain),
      worstCasePpm: gain.worst,
      rssPpm: gain.rss,
      usedPpm: used(gain),
    },
    offset: {
      centreV: centreOf(terms.offset),
      worstCaseV: offset.worst,
      rssV: offset.rss,
      usedV: used(offset),
    },
    ...head,
  }
}

/** Sum of the biases. */
export function centreOf(terms: readonly Term[], weight: (term: Term) => number = () => 1): number {
  let centre = 0
  for (const term of terms) centre += weight(term) * term.nominal
  return centre
}
