import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { capability, expectedOutside } from '../../../shared/solver/lots/capability.ts'
import { individualsChart } from '../../../shared/solver/lots/individuals.ts'
import { spreadOf } from '../../../shared/solver/lots/spread.ts'
import { driftOf, stationDifference } from '../../../shared/solver/lots/stations.ts'

/** Lot statistics against published examples; each says where its values stand. */
const spc = JSON.parse(readFileSync(new URL('../../vectors/spc.json', import.meta.url), 'utf8')) as {
  capability: { USL: string; LSL: string; mean: string; s: string; published: Record<string, string> }
  individuals: { x: string[]; mr_printed: string[]; published: Record<string, string | number> }
}
const decimals = (text: string) => text.split('.')[1]?.length ?? 0

describe('NIST/SEMATECH e-Handbook', () => {
  test('6.1.6: Cp, Cpk, Cpu, Cpl of limits 8 and 20, mean 16, s 2', () => {
    const { USL, LSL, mean, s, published } = spc.capability
    const found = capability(Number(mean), Number(s), { low: Number(LSL), high: Number(USL) })
    for (const [name, value] of [
      ['Cp', found?.cp],
      ['Cpk', found?.cpk],
      ['Cpu', found?.cpu],
      ['Cpl', found?.cpl],
    ] as const) {
      expect(value?.toFixed(decimals(published[name]!)), name).toBe(published[name])
    }
  })

  test('6.3.2.2: the individuals chart of ten flow rates, its centre, limits and moving ranges', () => {
    const { x, mr_printed, published } = spc.individuals
    const values = x.map(Number)
    const chart = individualsChart(values)
    expect(chart?.mean.toFixed(2)).toBe(published.xbar)
    expect(chart?.meanMovingRange.toFixed(4)).toBe(published.mrbar)
    // The page computes its limits from the rounded mean moving range: equal within its last digit but one.
    expect(chart?.upper).toBeCloseTo(Number(published.ucl), 3)
    expect(chart?.lower).toBeCloseTo(Number(published.lcl), 3)
    expect(values.filter((value) => value > chart!.upper || value < chart!.lower).length).toBe(
      published.out_of_control_points,
    )
    mr_printed.forEach((range, i) => {
      expect(Math.abs(values[i + 1]! - values[i]!).toFixed(1)).toBe(range)
    })
  })
})

describe('expected share out of reach', () => {
  // Tails of the normal distribution, from memory of any table: 2.699796e-3 beyond ±3 s, 0.3173105 beyond ±1 s.
  test('±3 s and ±1 s', () => {
    expect(expectedOutside(0, 1, { low: -3, high: 3 })).toBeCloseTo(0.0026997960632601866, 15)
    expect(expectedOutside(0, 1, { low: -1, high: 1 })).toBeCloseTo(0.31731050786291415, 14)
  })

  test('a far limit keeps its digits instead of becoming zero', () => {
    const share = expectedOutside(-118.3, 78.8, { low: -610.8, high: 610.8 })!
    expect(share).toBeGreaterThan(1e-11)
    expect(share).toBeLessThan(1e-8)
  })

  test('without spread it is all or nothing, and unknown with one value', () => {
    expect(expectedOutside(5, 0, { low: -3, high: 3 })).toBe(1)
    expect(expectedOutside(0, 0, { low: -3, high: 3 })).toBe(0)
    expect(expectedOutside(0, null, { low: -3, high: 3 })).toBeNull()
  })
})

describe('stations', () => {
  // Welch's test by its own formula, worked by hand: means 10 and 8, s² 4 and 9, n 10 and 15, so u² = 0.4 + 0.6 = 1.
  test('difference of two means with unequal spread', () => {
    const difference = stationDifference({ n: 10, mean: 10, s: 2 }, { n: 15, mean: 8, s: 3 })!
    expect(difference.value).toBe(2)
    expect(difference.standard).toBeCloseTo(1, 14)
    expect(difference.dof).toBeCloseTo(1 / (0.16 / 9 + 0.36 / 14), 10)
    // t(0.975, 22.99) is 2.069 in any table (from memory).
    expect(difference.k).toBeCloseTo(2.069, 3)
  })

  test('a drift is the slope of the weighted line; a station that holds has none that is clear', () => {
    const drift = driftOf([0, 1, 2, 3].map((at) => ({ at, value: -7 * at, u: 2 })))!
    expect(drift.perStep).toBeCloseTo(-7, 12)
    // u(slope) = u/√Σ(t - t̄)² = 2/√5 for equal weights.
    expect(drift.standard).toBeCloseTo(2 / Math.sqrt(5), 12)
    expect(drift.isClear).toBe(true)
    expect(driftOf([1, -1, 1, -1].map((value, at) => ({ at, value, u: 3 })))?.isClear).toBe(false)
    expect(driftOf([{ at: 0, value: 0, u: 1 }])).toBeNull()
  })
})

describe('spread', () => {
  test('does not lose digits on a large common part', () => {
    const spread = spreadOf([1e9 + 4, 1e9 + 7, 1e9 + 13, 1e9 + 16])!
    expect(spread.mean - 1e9).toBe(10)
    // The variance of 4, 7, 13, 16 is 30: the classic case for which one pass fails.
    expect(spread.s! * spread.s!).toBeCloseTo(30, 9)
  })

  test('one value has no spread, none has nothing, and what is no number is refused', () => {
    expect(spreadOf([3])).toEqual({ n: 1, mean: 3, s: null })
    expect(spreadOf([])).toBeNull()
    expect(individualsChart([3])).toBeNull()
    expect(() => spreadOf([1, Number.NaN])).toThrow(expect.objectContaining({ code: 'not-finite' }))
  })
})
