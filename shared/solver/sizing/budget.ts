import { OgeeError } from '../../errors.ts'
import type { GainLine, OffsetLine, SizingDesign } from './types.ts'

/** A budget line as the sums take it: limit, standard uncertainty and bias in ppm (gain) or V (offset), and the pivot. */
export type Term = {
  name: string
  when: 'initial' | 'drift' | 'noise'
  limit: number
  u: number
  nominal: number
  pivotV: number
}
export type Terms = { gain: Term[]; offset: Term[] }

/**
 * The budget's lines with their standard uncertainties, in ppm and volts; empty lists without a budget.
 * @throws budget-line, at the line's field
 * Source: solver.md section 6; JCGM 100:2008 4.3.7 (rectangular), 4.3.9 (triangular), 4.3.4 to 4.3.6 (normal); arcsine:
 * JCGM 101:2008 6.4.6.
 * @example budgetTerms(unipolar18).gain[0]?.limit // 120
 */
export function budgetTerms(design: SizingDesign): Terms {
  const gain = (design.budget?.gain ?? []).map((line, i): Term => {
    check(line, 'gain', i, 'limitPpm', line.limitPpm, line.nominalPpm)
    return {
      name: line.name,
      when: line.when,
      limit: line.limitPpm,
      u: standardOf(line, line.limitPpm),
      nominal: line.nominalPpm ?? 0,
      pivotV: line.pivotV ?? 0,
    }
  })
  const offset = (design.budget?.offset ?? []).map((line, i): Term => {
    check(line, 'offset', i, 'limitV', line.limitV, line.nominalV)
    const u = standardOf(line, line.limitV)
    return { name: line.name, when: line.when, limit: line.limitV, u, nominal: line.nominalV ?? 0, pivotV: 0 }
  })
  return { gain, offset }
}

/** Standard uncertainty of a limit by the line's distribution. */
function standardOf(line: GainLine | OffsetLine, limit: number): number {
  if (line.distribution === 'rectangular') return limit / Math.sqrt(3)
  if (line.distribution === 'triangular') return limit / Math.sqrt(6)
  if (line.distribution === 'arcsine') return limit / Math.sqrt(2)
  return limit / (line.k ?? 1)
}

function check(
  line: GainLine | OffsetLine,
  which: 'gain' | 'offset',
  i: number,
  field: string,
  limit: number,
  nominal: number | undefined,
): void {
  const name = `${which === 'gain' ? 'Gain' : 'Offset'} budget, line ${i + 1}`
  const refuse = (at: string, sentence: string): never => {
    const message = `${name}: ${sentence}`
    throw new OgeeError('budget-line', message, {
      errors: [{ path: `/budget/${which}/${i}/${at}`, message }],
    })
  }
  if (!(limit >= 0) || !Number.isFinite(limit)) {
    refuse(field, `the limit is ${limit}; it must be a finite number of at least 0.`)
  }
  if (nominal !== undefined && !Number.isFinite(nominal)) {
    refuse(which === 'gain' ? 'nominalPpm' : 'nominalV', 'the nominal value is not a finite number.')
  }
  if (line.distribution === 'normal' && !(line.k !== undefined && line.k > 0 && Number.isFinite(line.k))) {
    refuse('k', 'a normal distribution needs k, the number of standard deviations in its limit.')
  }
}

/** Lines that a trim must reach: initial and drift, for a later re-trim must still reach. */
export const toReach = (terms: readonly Term[]): Term[] => terms.filter(({ when }) => when !== 'noise')
/** Lines that stay after a trim: drift until the next one, and noise. */
export const toStay = (terms: readonly Term[]): Term[] => terms.filter(({ when }) => when !== 'initial')

/** Σ limits, and the smaller of it and 2·√Σu². */
export function sums(terms: readonly Term[], weight: (term: Term) => number = () => 1) {
  let worst = 0
  let squares = 0
  for (const term of terms) {
    const w = Math.abs(weight(term))
    worst += w * term.limit
    squares += w * term.u * (w * term.u)
  }
  return { worst, rss: Math.min(2 * Math.sqrt(squares), worst) }
}
