import { describe, expect, expectTypeOf, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { type YieldDocument, yieldDocument } from '../../../shared/contract/yield.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { codesOn } from '../../../shared/solver/codes.ts'
import { randomStreams } from '../../../shared/solver/random/generator.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { CodesResult, MeasuredPoint } from '../../../shared/solver/types.ts'
import { drawUnit, emptyUnit } from '../../../shared/solver/yield/draw-unit.ts'
import { emptyPoints, measureUnit } from '../../../shared/solver/yield/measure.ts'
import { yieldPlan } from '../../../shared/solver/yield/plan.ts'
import { simulateYield, startYield } from '../../../shared/solver/yield/simulate.ts'
import { type Memory, type Trimmed, trimUnit } from '../../../shared/solver/yield/trim-unit.ts'
import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import { adjuster, handDesign, sizingExample } from '../sizing/designs.ts'

const unipolar = sizingExample('unipolar-18')
const noisy: SizingDesign = {
  ...unipolar,
  measurement: {
    ...unipolar.measurement,
    readings: 4,
    noiseV: 1.5e-6,
    instrument: { gainPpm: 3, offsetV: 2e-6 },
  },
}

describe('the same fit and codes as the rest of the solver, bit for bit', () => {
  const plans: [string, SizingDesign][] = [
    ['without noise', unipolar],
    ['four noisy readings', noisy],
    ['a meter that rounds', { ...noisy, measurement: { ...noisy.measurement, resolutionV: 1e-6 } }],
    [
      'rounding alone',
      { ...unipolar, measurement: { ...unipolar.measurement, resolutionV: 1e-6, readings: 3 } },
    ],
    [
      'replicated codes',
      { ...noisy, measurement: { ...noisy.measurement, points: [262143, 0, 131072, 0, 262143] } },
    ],
    ['minimax', { ...noisy, measurement: { ...noisy.measurement, method: 'minimax' } }],
    ['terminal', { ...noisy, measurement: { ...noisy.measurement, method: 'terminal' } }],
    ['gain alone', { ...noisy, adjusters: { gain: noisy.adjusters.gain } }],
    ['bipolar', sizingExample('bipolar-16')],
    [
      'out of reach often',
      {
        ...noisy,
        budget: {
          gain: [{ name: 'G', limitPpm: 1500, distribution: 'rectangular', when: 'initial' }],
          offset: [],
        },
      },
    ],
  ]

  test.each(plans)('%s', (_, design) => {
    const plan = yieldPlan(design)
    const { random, restart } = randomStreams()
    const unit = emptyUnit(plan)
    const set = emptyPoints(plan)
    for (const learns of [false, true]) {
      for (let n = 0; n < 150; n++) {
        restart(99, n)
        drawUnit(plan, unit, random)
        const memory: Memory | null = learns ? { previous: null } : null
        let loaded: Trimmed | null = null
        let before: CodesResult | undefined
        for (let pass = 1; pass <= 3; pass++) {
          // The true line need not be right here, only the same for both.
          measureUnit(plan, set, unit, unit.offset / (pass * pass), unit.gain / (pass * pass), random)
          const points: MeasuredPoint[] = set.codes.map((code, i) => {
            const readings = set.readings[i]
            return readings ? { code, readings: [...readings] } : { code, measured: set.y[i]! }
          })
          const applied =
            loaded === null
              ? 'neutral'
              : { gain: loaded.gain ?? undefined, offset: loaded.offset ?? undefined }
          const wanted = codesOn(plan.trim, points, {
            applied,
            ...(learns && before ? { learned: before } : {}),
          })
          const got = trimUnit(plan, set, loaded, memory)
          expect(got === null ? null : codesIn(got)).toEqual(wanted.trim.codes)
          if (got === null) break
          expect(got.tooCoarse).toBe(wanted.trim.reasons.includes('too-coarse'))
          loaded = got
          before = wanted
        }
      }
    }
  })

  function codesIn({ gain, offset }: Trimmed) {
    return { ...(gain === null ? {} : { gain }), ...(offset === null ? {} : { offset }) }
  }
})

describe('repeatable, in any blocks, stoppable', () => {
  test('the same seed gives the same result; another seed another', () => {
    const a = simulateYield(noisy, { trials: 3000, seed: 5 })
    expect(simulateYield(noisy, { trials: 3000, seed: 5 })).toEqual(a)
    expect(simulateYield(noisy, { trials: 3000, seed: 6 })).not.toEqual(a)
  })

  test('frozen numbers: a change is a new solver version', () => {
    const { passes, remainingLsb } = simulateYield(noisy, { trials: 2000, seed: 1 })
    expect(passes.map((pass) => Math.round(pass.yield * 2000))).toEqual(FROZEN.good)
    expect(remainingLsb.quantiles.find(({ probability }) => probability === 0.5)!.lsb).toBe(FROZEN.median)
  })

  test('blocks change no number, and a stopped run is the start of a longer one', () => {
    const whole = startYield(noisy, { trials: 1000 })
    expect(whole.step(1000)).toBe(true)
    const pieces = startYield(noisy, { trials: 1000 })
    for (const size of [1, 7, 300]) expect(pieces.step(size)).toBe(false)
    const stopped = pieces.result()
    expect(stopped).toMatchObject({ trials: 308, stopped: true })
    expect(pieces.step(5000)).toBe(true)
    expect(pieces.result()).toEqual(whole.result())
    const short = simulateYield(noisy, { trials: 308 })
    expect({ ...stopped, stopped: false }).toEqual(short)
  })

  test('progress and stop are asked between blocks', () => {
    const seen: number[] = []
    const result = simulateYield(unipolar, {
      trials: 10_000,
      onProgress: (done) => seen.push(done),
      shouldStop: () => seen.length === 2,
    })
    expect(seen).toEqual([2000, 4000])
    expect(result).toMatchObject({ trials: 4000, stopped: true })
    expect(() => simulateYield(unipolar, { shouldStop: () => true })).toThrow(OgeeError)
  })
})

describe('what is reported', () => {
  const result = simulateYield(noisy, { trials: 5000, passes: 3, effects: 'learned' })

  test('shares add up, intervals hold their share, histograms count every unit in reach', () => {
    for (const pass of result.passes) {
      expect(pass.yield + pass.outOfReach + pass.failing).toBeCloseTo(1, 12)
      expect(pass.low95).toBeLessThanOrEqual(pass.yield)
      expect(pass.high95).toBeGreaterThanOrEqual(pass.yield)
    }
    const { histogram, units, quantiles } = result.remainingLsb
    const sum = (counts: readonly number[]) => counts.reduce((total, count) => total + count, 0)
    expect(sum(histogram.counts) + histogram.over).toBe(units)
    expect(sum(result.codes.gain!.counts)).toBe(units)
    const sizes = quantiles.map(({ lsb }) => lsb!)
    expect(sizes).toEqual([...sizes].sort((a, b) => a - b))
    // Share within the tolerance, read off the histogram: its bars end on the tolerance.
    const within = sum(histogram.counts.slice(0, Math.round(result.toleranceLsb / histogram.width)))
    expect(within / 5000).toBeCloseTo(result.passes.at(-1)!.yield, 3)
  })

  test('learning helps; more passes do not hurt', () => {
    const design = simulateYield(noisy, { trials: 5000, passes: 2 })
    expect(result.passes[0]).toEqual(design.passes[0])
    expect(result.passes[1]!.yield).toBeGreaterThan(design.passes[1]!.yield)
    expect(design.passes[1]!.yield).toBeGreaterThan(design.passes[0]!.yield)
  })

  test('schema and types', () => {
    expect(yieldDocument.parse(result)).toEqual(result)
    expectTypeOf<YieldResult>().toExtend<YieldDocument>()
    expect(simulateYield(designDocument.parse(unipolar), { trials: 100 })).toEqual(
      simulateYield(unipolar, { trials: 100 }),
    )
  })

  test('no unit in reach: quantiles are null, nothing is NaN', () => {
    const far = handDesign({
      adjusters: { offset: adjuster({ alpha: 1e-6 }) },
      budget: {
        gain: [],
        offset: [{ name: 'O', limitV: 0, nominalV: 1, distribution: 'rectangular', when: 'initial' }],
      },
    })
    const { passes, remainingLsb, codes } = simulateYield(far, { trials: 10 })
    expect(passes[0]).toMatchObject({ yield: 0, outOfReach: 1, failing: 0 })
    expect(remainingLsb.quantiles.every(({ lsb }) => lsb === null)).toBe(true)
    expect(codes.offset).toMatchObject({ least: null, most: null, mean: null })
  })
})

describe('bad input', () => {
  const cases: [string, SizingDesign, object, string, string][] = [
    ['no tolerance to judge by', { ...unipolar, decision: undefined }, {}, 'tolerance-missing', '/decision'],
    ['no trials', unipolar, { trials: 0 }, 'invalid-request', '/trials'],
    ['a fraction of a trial', unipolar, { trials: 1.5 }, 'invalid-request', '/trials'],
    ['too many', unipolar, { trials: 1e8 }, 'invalid-request', '/trials'],
    ['a negative seed', unipolar, { seed: -1 }, 'invalid-request', '/seed'],
    ['ten passes', unipolar, { passes: 10 }, 'invalid-request', '/passes'],
    ['one code', handDesign({ measurement: { points: [5, 5] } }), {}, 'too-few-codes', '/measurement/points'],
    [
      'a code that does not exist',
      handDesign({ measurement: { points: [0, 65536] } }),
      {},
      'code-out-of-range',
      '/measurement/points',
    ],
  ]
  test.each(cases)('%s', (_, design, options, code, path) => {
    try {
      startYield(design, options)
      expect.unreachable()
    } catch (error) {
      expect(error).toBeInstanceOf(OgeeError)
      expect((error as OgeeError).code).toBe(code)
      expect((error as OgeeError).errors[0]!.path).toBe(path)
    }
  })
})

/** Seed 1, 2000 units of unipolar-18 with four noisy readings; from this solver, version 1.0.0. */
const FROZEN = { good: [353, 1125], median: 0.9380039146135136 }
