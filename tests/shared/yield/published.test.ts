import { describe, expect, test } from 'vitest'
import { draw, normal } from '../../../shared/solver/random/draw.ts'
import { randomStream } from '../../../shared/solver/random/generator.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { OffsetLine, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { simulateYield } from '../../../shared/solver/yield/simulate.ts'
import { wilson } from '../../../shared/solver/yield/wilson.ts'
import { vector } from '../../support/solver-fixtures.ts'
import { adjuster, handDesign } from '../sizing/designs.ts'

/** JCGM 101:2008, 9.2: sums of four inputs of u = 1, and the same through the whole simulation. */
type Case = {
  clause: string
  inputs: { pdf: 'normal' | 'rectangular'; u: string }[]
  published: { u: string; hi: string }
}
const { cases } = vector<{ cases: Case[] }>('jcgm101-additive.json')
const trials = 200_000

/** Limits whose standard uncertainty is 1: three standard deviations, or the root of 3. */
const lineOf = ({ pdf }: Case['inputs'][number], scale: number, i: number): OffsetLine => ({
  name: `X${i + 1}`,
  limitV: (pdf === 'normal' ? 3 : Math.sqrt(3)) * scale,
  distribution: pdf,
  k: pdf === 'normal' ? 3 : undefined,
  when: 'noise',
})

describe.each(cases)('JCGM 101:2008, $clause', ({ inputs, published }) => {
  test('draws: standard uncertainty and the symmetric 95 % interval', () => {
    const sums: number[] = []
    let squares = 0
    for (let i = 0; i < trials; i++) {
      const random = randomStream(1, i)
      let sum = 0
      inputs.forEach((input, k) => {
        const line = lineOf(input, 1, k)
        sum += draw(random, line, line.limitV)
      })
      squares += sum * sum
      sums.push(Math.abs(sum))
    }
    sums.sort((a, b) => a - b)
    expect(Math.sqrt(squares / trials)).toBeCloseTo(Number(published.u), 1)
    // The 95 % point of 200 000 trials has a standard deviation of 0.008: three of them.
    expect(Math.abs(sums[Math.ceil(0.95 * trials) - 1]! - Number(published.hi))).toBeLessThan(0.025)
  })

  test('the whole simulation, as noise that no trim removes, in LSB', () => {
    const lsb = 10 / 65536
    const offset = inputs.map((input, i) => lineOf(input, lsb, i))
    // Steps so fine that nothing else is left.
    const fine = adjuster({ alpha: 1, source: { bits: 24, lowV: -0.01, highV: 0.01 } })
    const design = handDesign({ adjusters: { offset: fine }, budget: { gain: [], offset } })
    const { remainingLsb } = simulateYield(design, { trials, passes: 1, seed: 3 })
    const at95 = remainingLsb.quantiles.find(({ probability }) => probability === 0.95)!.lsb!
    expect(Math.abs(at95 - Number(published.hi))).toBeLessThan(0.025)
  })
})

describe('distributions against their closed forms', () => {
  test.each([
    ['rectangular', Math.sqrt(3)],
    ['triangular', Math.sqrt(6)],
    ['arcsine', Math.sqrt(2)],
    ['normal', 2],
  ] as const)('%s: standard deviation is the limit over %s', (distribution, divisor) => {
    let squares = 0
    let mean = 0
    let most = 0
    for (let i = 0; i < trials; i++) {
      const value = draw(randomStream(11, i), { distribution, k: 2 }, 1)
      mean += value / trials
      squares += value * value
      most = Math.max(most, Math.abs(value))
    }
    expect(Math.abs(mean)).toBeLessThan(0.006)
    expect(Math.sqrt(squares / trials) * divisor).toBeCloseTo(1, 1.9)
    if (distribution !== 'normal') expect(most).toBeLessThanOrEqual(1)
  })

  test('normal: shares within 1, 2 and 3 standard deviations', () => {
    const random = randomStream(5, 0)
    const within = [0, 0, 0]
    for (let i = 0; i < trials; i++) {
      const size = Math.abs(normal(random))
      for (let k = 0; k < 3; k++) if (size <= k + 1) within[k]! += 1
    }
    ;[0.6826894921, 0.9544997361, 0.9973002039].forEach((share, k) => {
      expect(Math.abs(within[k]! / trials - share)).toBeLessThan(0.004)
    })
  })
})

describe('closed forms through the simulation', () => {
  const lone = (source: object, limitV: number, tau = 0): SizingDesign =>
    handDesign({
      adjusters: {
        offset: adjuster({
          alpha: 1,
          effectTolerance: tau,
          source: { bits: 12, lowV: -0.01, highV: 0.01, ...source },
        }),
      },
      budget: { gain: [], offset: [{ name: 'O', limitV, distribution: 'rectangular', when: 'initial' }] },
    })

  test('out of reach: a rectangular error over a reach of half its limit', () => {
    const { passes } = simulateYield(lone({}, 0.02), { trials, passes: 1 })
    const { low, high } = wilson(Math.round(passes[0]!.outOfReach * trials), trials)
    expect(low).toBeLessThan(0.5)
    expect(high).toBeGreaterThan(0.5)
  })

  test('quantising: the remaining error is rectangular up to half a step, so a tolerance of a quarter step passes half', () => {
    const step = 0.02 / 4096
    const design = {
      ...lone({}, 0.009),
      decision: { rule: 'simple' as const, tolerance: { value: step / 4, unit: 'V' as const } },
    }
    const { passes, remainingLsb } = simulateYield(design, { trials, passes: 1 })
    expect(passes[0]!.outOfReach).toBe(0)
    expect(passes[0]!.low95).toBeLessThan(0.5)
    expect(passes[0]!.high95).toBeGreaterThan(0.5)
    const lsb = 10 / 65536
    expect(remainingLsb.quantiles.at(-1)!.lsb! * lsb).toBeLessThanOrEqual((step / 2) * (1 + 1e-9))
  })

  test('effect: after p passes at most τ^p of the error is left, and nearly that much is', () => {
    const design = lone({ bits: 22 }, 0.005, 0.2)
    const lsb = 10 / 65536
    for (const p of [1, 2, 3]) {
      const { remainingLsb } = simulateYield(design, { trials: 20_000, passes: p })
      const worst = remainingLsb.quantiles.at(-1)!.lsb! * lsb
      expect(worst).toBeLessThanOrEqual(0.005 * 0.2 ** p * 1.01)
      expect(worst).toBeGreaterThan(0.005 * 0.2 ** p * 0.8)
    }
  })

  test('a gain line turns the output about its pivot: the offset code takes out what that leaves at the offset point', () => {
    const gain = [
      { name: 'G', limitPpm: 0, nominalPpm: 100, pivotV: 5, distribution: 'rectangular', when: 'initial' },
    ] as const
    const { codes } = simulateYield(handDesign({ budget: { gain, offset: [] } }), { trials: 3, passes: 1 })
    // -0.5 mV at 0 V asks 50 mV more at 1e-2 V/V, 102.4 steps; +100 ppm asks 100 mV less at 1e-3 /V, 204.8 steps.
    expect(codes.offset!.mean! - 2048).toBeCloseTo(102.4, -0.5)
    expect(codes.gain!.mean! - 2048).toBeCloseTo(-204.8, -0.5)
  })

  test('the sizing’s worst case holds every simulated unit: no remaining error is over its sum', () => {
    const design = handDesign({
      converter: { bits: 16, coding: 'straight-binary', inlLsb: 0.5 },
      measurement: { points: [0, 16384, 32768, 49152, 65535], instrument: { gainPpm: 3, offsetV: 2e-5 } },
    })
    const { residual } = sizeDesign(design)
    const { remainingLsb } = simulateYield(design, { trials: 20_000, passes: 1 })
    // The fit is drawn off by the linearity at most as far as the linearity goes, once more than the sum knows.
    expect(remainingLsb.quantiles.at(-1)!.lsb!).toBeLessThan(residual.worstCaseLsb + 0.5)
    expect(remainingLsb.quantiles.at(-1)!.lsb!).toBeGreaterThan(0.3 * residual.worstCaseLsb)
  })
})

describe('Wilson interval', () => {
  // From memory: 95 % interval of 8 of 10 is 0.490 to 0.943; of 0 of 10 is 0 to 0.278.
  test('known values', () => {
    expect(wilson(8, 10).low).toBeCloseTo(0.49, 3)
    expect(wilson(8, 10).high).toBeCloseTo(0.943, 3)
    expect(wilson(0, 10)).toMatchObject({ low: 0 })
    expect(wilson(0, 10).high).toBeCloseTo(0.278, 3)
    expect(wilson(10, 10).high).toBe(1)
  })
})
