import { describe, expect, test } from 'vitest'
import { chiSquaredUpper } from '../../../shared/solver/distribution/chi-squared.ts'
import { normalUpper } from '../../../shared/solver/distribution/normal.ts'
import { budgetTerms } from '../../../shared/solver/sizing/budget.ts'
import { extentsFromBudget } from '../../../shared/solver/sizing/extents.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { toleranceFactor } from '../../../shared/solver/sizing/tolerance-factor.ts'
import { vector } from '../../support/solver-fixtures.ts'
import { adjuster, handDesign } from './designs.ts'

type Factors = {
  handbook: { n: number; share: number; confidence: number; z: number; chiSquared: number; k: number }
  exactTables: { n: number; share: number; confidence: number; k: number }[]
}
const factors = vector<Factors>('tolerance-factors.json')

describe('tolerance factors: NIST/SEMATECH e-Handbook 7.2.6.3', () => {
  const { n, share, confidence, z, chiSquared, k } = factors.handbook

  test('the example of the handbook with its intermediate quantities', () => {
    expect(normalUpper((1 - share) / 2)).toBeCloseTo(z, 7)
    expect(chiSquaredUpper(confidence, n - 1)).toBeCloseTo(chiSquared, 6)
    expect(toleranceFactor(n, { share, confidence })).toBeCloseTo(k, 7)
  })

  test.each(factors.exactTables)('n = $n, p = $share: within 0.2 % of the exact factor $k', (row) => {
    const got = toleranceFactor(row.n, row)
    expect(Math.abs(got / row.k - 1)).toBeLessThan(0.002)
  })
})

describe('resolution of a converter of 10 V: Data Conversion Handbook (2005), chapter 2', () => {
  type Table = { rows: { N: number; lsb_volts_exact: string }[] }
  const rows = vector<Table>('resolution-table.json').rows

  test.each(rows)('$N bits: a step of $lsb_volts_exact V', ({ N, lsb_volts_exact }) => {
    // An auxiliary DAC of N bits over 10 V, taken straight to a node that moves the output volt for volt.
    const offset = adjuster({ alpha: 1, source: { bits: N, lowV: 0, highV: 10 } })
    const design = handDesign({ adjusters: { offset } })
    expect(sizeDesign(design).adjusters.offset!.available.outputStepV).toBe(Number(lsb_volts_exact))
  })

  test.each(rows)('$N bits are what a span of 2^N - 1 steps of that size needs', ({ N, lsb_volts_exact }) => {
    const step = Number(lsb_volts_exact)
    const limitV = (step * (2 ** N - 1)) / 2
    // One adjuster: the allowed step is twice the target.
    const design = handDesign({
      adjusters: { offset: adjuster({ alpha: 1 }) },
      budget: { gain: [], offset: [{ name: 'O', limitV, distribution: 'rectangular', when: 'initial' }] },
      target: { residual: { value: step / 2, unit: 'V' } },
    })
    expect(sizeDesign(design).adjusters.offset!.requiredBits).toBe(N)
  })
})

describe('closed-form sums of a budget: JCGM 100:2008, 4.3 and 5.1', () => {
  test('rectangular, triangular, arcsine and normal lines', () => {
    const line = (limitV: number, distribution: 'rectangular' | 'triangular' | 'arcsine' | 'normal') =>
      ({ name: distribution, limitV, distribution, k: 2, when: 'initial' }) as const
    const offset = [line(3, 'rectangular'), line(6, 'triangular'), line(2, 'arcsine'), line(4, 'normal')]
    const design = handDesign({ budget: { gain: [], offset } })
    const { extents } = extentsFromBudget(budgetTerms(design), 'rss')
    // u² = 9/3 + 36/6 + 4/2 + 16/4 = 15.
    expect(extents.offset.rssV).toBeCloseTo(2 * Math.sqrt(15), 12)
    expect(extents.offset.worstCaseV).toBe(15)
    expect(extents.offset.usedV).toBe(extents.offset.rssV)
  })

  test('a single rectangular line: RSS would pass the worst case and is held to it', () => {
    const design = handDesign()
    const { extents } = extentsFromBudget(budgetTerms(design), 'rss')
    expect(extents.offset.rssV).toBe(extents.offset.worstCaseV)
  })
})

describe('common practice, no source', () => {
  test('10 V, 18 bits: 2 mV of gain error taken out by 96 mV leave a 12-bit auxiliary DAC with resolution to spare', () => {
    // 2 mV at full scale is 200 ppm; 96 mV at the node take it out: 2.0833e-3 /V.
    const design = handDesign({
      converter: { bits: 18, coding: 'straight-binary' },
      adjusters: {
        gain: adjuster({ beta: 200e-6 / 0.096, source: { bits: 12, lowV: -0.125, highV: 0.125 } }),
      },
      budget: {
        gain: [{ name: 'G', limitPpm: 200, distribution: 'rectangular', when: 'initial' }],
        offset: [],
      },
      sizing: { combine: 'worst-case', margin: 0.25 },
      target: { residual: { value: 0.5, unit: 'LSB' } },
    })
    const gain = sizeDesign(design).adjusters.gain!
    expect(gain.reachBeforeMarginV).toBeCloseTo(0.096, 12)
    expect(gain.verdict).toBe('covers')
    expect(gain.spareBits).toBeGreaterThanOrEqual(2)
    expect(gain.requiredBits).toBeLessThan(12)
  })
})
