import { describe, expect, test } from 'vitest'
import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import type { Adjuster, Design, MeasuredPoint } from '../../../shared/solver/types.ts'
import { plainDesign } from '../../support/solver-fixtures.ts'

/** Every refusal: its code, the place it names, and the words a person needs. */
function refusal(act: () => unknown): OgeeError {
  try {
    act()
  } catch (error) {
    if (isOgeeError(error)) return error
    throw error
  }
  throw new Error('nothing was refused')
}
const base = plainDesign()
const good: MeasuredPoint[] = [
  { code: 0, measured: 0 },
  { code: 32768, measured: 5 },
  { code: 65535, measured: 9.9998 },
]
const pointsWith = (bad: MeasuredPoint) => [good[0]!, bad, good[2]!]
const gainWith = (change: Partial<Adjuster>): Design =>
  plainDesign({ adjusters: { ...base.adjusters, gain: { ...base.adjusters.gain!, ...change } } })

describe('points that are refused', () => {
  test.each<[string, MeasuredPoint[], string, string, RegExp]>([
    ['no point', [], 'too-few-codes', '/points', /No point: two different codes/],
    ['one point', good.slice(0, 1), 'too-few-codes', '/points', /One point: two different codes/],
    ['two points at one code', [good[0]!, good[0]!], 'too-few-codes', '/points', /2 points at one code/],
    [
      'millivolts typed as volts',
      pointsWith({ code: 32768, measured: 4998.98 }),
      'implausible-point',
      '/points/1/measured',
      /4998\.98 V at code 32768 is 4994 V from ideal; 5 % of FSR is allowed/,
    ],
    [
      'code above full scale',
      pointsWith({ code: 65536, measured: 5 }),
      'code-out-of-range',
      '/points/1/code',
      /the highest is 65535/,
    ],
    ['a negative code', pointsWith({ code: -1, measured: 5 }), 'code-out-of-range', '/points/1/code', /-1/],
    ['half a code', pointsWith({ code: 0.5, measured: 5 }), 'code-out-of-range', '/points/1/code', /0\.5/],
    [
      'a word with too many bits',
      pointsWith({ word: '0x10000', measured: 5 }),
      'code-out-of-range',
      '/points/1/word',
      /16 bits/,
    ],
    [
      'a target outside the range',
      pointsWith({ target: 10.01, measured: 5 }),
      'outside-range',
      '/points/1/target',
      /outside the range, 0 V to 9\.99/,
    ],
    [
      'code and target that disagree',
      pointsWith({ code: 1, target: 5, measured: 5 }),
      'code-target-disagree',
      '/points/1/target',
      /is code 32768, not 1/,
    ],
    [
      'code and word that disagree',
      pointsWith({ code: 1, word: '0x8000', measured: 5 }),
      'code-target-disagree',
      '/points/1/word',
      /is code 32768/,
    ],
    [
      'u of 0',
      pointsWith({ code: 32768, measured: 5, uncertainty: 0 }),
      'uncertainty-not-positive',
      '/points/1/uncertainty',
      /must be over 0 V/,
    ],
    [
      'a negative u',
      pointsWith({ code: 32768, measured: 5, uncertainty: -1 }),
      'uncertainty-not-positive',
      '/points/1/uncertainty',
      /-1 V/,
    ],
    [
      'u that is not finite',
      pointsWith({ code: 32768, measured: 5, uncertainty: Number.NaN }),
      'not-finite',
      '/points/1/uncertainty',
      /NaN/,
    ],
    [
      'u in the wrong unit, wider than the range',
      pointsWith({ code: 32768, measured: 5, uncertainty: 20 }),
      'implausible-uncertainty',
      '/points/1/uncertainty',
      /Check its unit/,
    ],
    [
      'u smaller than any meter',
      pointsWith({ code: 32768, measured: 5, uncertainty: 1e-160 }),
      'implausible-uncertainty',
      '/points/1/uncertainty',
      /1e-160 V/,
    ],
    [
      'a value that is not finite',
      pointsWith({ code: 32768, measured: Number.POSITIVE_INFINITY }),
      'not-finite',
      '/points/1/measured',
      /not a finite/,
    ],
    [
      'a reading that is not finite',
      pointsWith({ code: 32768, readings: [5, Number.NaN] }),
      'not-finite',
      '/points/1/readings',
      /reading/,
    ],
    [
      'a point without a value',
      pointsWith({ code: 32768 }),
      'point-incomplete',
      '/points/1/measured',
      /no measured value/,
    ],
    [
      'a point without a code',
      pointsWith({ measured: 5 }),
      'point-incomplete',
      '/points/1/code',
      /code, word or target/,
    ],
  ])('%s', (_, points, code, path, words) => {
    const error = refusal(() => fitPoints(base, points))
    expect(error.code).toBe(code)
    expect(error.errors[0]!.path).toBe(path)
    expect(error.message).toMatch(words)
  })

  test('every bad point is listed at once, by its place in the input', () => {
    const error = refusal(() =>
      fitPoints(base, [{ code: 70000, measured: 1 }, good[0]!, { code: 32768, measured: 4998 }]),
    )
    expect(error.errors.map(({ path }) => path)).toEqual(['/points/0/code', '/points/2/measured'])
  })

  test('target and code that agree, and the word in the converter’s coding, are taken', () => {
    const { fit } = fitPoints(base, [{ code: 0, target: 0.00007, word: '0x0', measured: 0 }, good[2]!])
    expect(fit.residuals[0]!.code).toBe(0)
    const bipolar = { ...base, converter: { bits: 16, coding: 'twos-complement' as const } }
    const two = fitPoints(bipolar, [
      { word: '8000', measured: 0 },
      { word: '0x7FFF', measured: 9.9998 },
    ])
    expect(two.fit.residuals.map(({ code }) => code)).toEqual([0, 65535])
  })

  test('the plausibility limit is the design’s', () => {
    const points = pointsWith({ code: 32768, measured: 5.7 })
    expect(refusal(() => fitPoints(base, points)).code).toBe('implausible-point')
    expect(fitPoints(plainDesign({ measurement: { plausiblePercent: 10 } }), points).fit.n).toBe(3)
  })
})

describe('designs that are refused', () => {
  test.each<[string, Design, string, string]>([
    ['a reversed range', plainDesign({ lowV: 10, highV: 0 }), 'range-reversed', '/ranges/0/highV'],
    ['an empty range', plainDesign({ lowV: 1, highV: 1 }), 'range-reversed', '/ranges/0/highV'],
    ['25 bits', plainDesign({ bits: 25 }), 'bits-out-of-bounds', '/converter/bits'],
    ['3 bits', plainDesign({ bits: 3 }), 'bits-out-of-bounds', '/converter/bits'],
    [
      'a range without end',
      plainDesign({ highV: Number.POSITIVE_INFINITY }),
      'not-finite',
      '/ranges/0/highV',
    ],
    [
      'a range that squares out of the doubles',
      plainDesign({ lowV: 0, highV: 1e200 }),
      'range-out-of-bounds',
      '/ranges/0/highV',
    ],
    ['a range of nothing', plainDesign({ lowV: 0, highV: 1e-12 }), 'range-out-of-bounds', '/ranges/0/highV'],
    ['no adjuster', plainDesign({ adjusters: {} }), 'no-adjuster', '/adjusters'],
    [
      'an effect of nothing',
      gainWith({ effect: { kind: 'measured', slopePerV: 0, offsetPerV: 0 } }),
      'effect-zero',
      '/adjusters/gain/effect',
    ],
    [
      'a tolerance of 1',
      gainWith({ effectTolerance: 1 }),
      'tolerance-out-of-bounds',
      '/adjusters/gain/effectTolerance',
    ],
    [
      'a negative tolerance',
      gainWith({ effectTolerance: -0.1 }),
      'tolerance-out-of-bounds',
      '/adjusters/gain/effectTolerance',
    ],
    [
      'a DAC of no span',
      gainWith({ source: { bits: 8, coding: 'straight-binary', lowV: 1, highV: 1 } }),
      'source-span-zero',
      '/adjusters/gain/source/highV',
    ],
    [
      'a DAC of no bits',
      gainWith({ source: { bits: 0, coding: 'straight-binary', lowV: 0, highV: 1 } }),
      'bits-out-of-bounds',
      '/adjusters/gain/source/bits',
    ],
    [
      'a resistance of 0',
      gainWith({ network: { kind: 'divider', topOhm: 0, bottomOhm: 1 } }),
      'resistance-not-positive',
      '/adjusters/gain/network/topOhm',
    ],
    [
      'a negative resistance',
      gainWith({ network: { kind: 'shifted', topOhm: 1, shiftOhm: -1, shiftV: 1 } }),
      'resistance-not-positive',
      '/adjusters/gain/network/shiftOhm',
    ],
    [
      'an input resistance of 0',
      gainWith({ node: { nominalV: 0, inputOhm: 0 } }),
      'resistance-not-positive',
      '/adjusters/gain/node/inputOhm',
    ],
    [
      'a reference of 0 V',
      gainWith({
        effect: { kind: 'reference-summing', inputOhm: 1, adjustOhm: 1, referenceV: 0, inverting: false },
      }),
      'reference-zero',
      '/adjusters/gain/effect/referenceV',
    ],
    [
      'two adjusters that do the same',
      gainWith({ effect: { kind: 'measured', slopePerV: 0, offsetPerV: 0.02 } }),
      'adjusters-not-independent',
      '/adjusters',
    ],
    [
      'a lone gain adjuster that does nothing at full scale',
      plainDesign({
        adjusters: {
          gain: {
            ...base.adjusters.gain!,
            effect: { kind: 'measured', slopePerV: 0.001, offsetPerV: -0.001 * (10 - 10 / 65536) },
          },
        },
      }),
      'adjuster-without-effect',
      '/adjusters/gain/effect',
    ],
    [
      'a lone offset adjuster that does nothing at 0 V',
      plainDesign({
        adjusters: {
          offset: {
            ...base.adjusters.offset!,
            effect: { kind: 'measured', slopePerV: 0.001, offsetPerV: 0 },
          },
        },
      }),
      'adjuster-without-effect',
      '/adjusters/offset/effect',
    ],
  ])('%s', (_, design, code, path) => {
    const error = refusal(() => computeCodes(design, good))
    expect(error.code).toBe(code)
    expect(error.errors[0]!.path).toBe(path)
  })

  test('nearly dependent adjusters are refused, barely independent ones are not', () => {
    const cross = (share: number) => {
      const effect = { kind: 'measured', slopePerV: 0.002, offsetPerV: 0.01 } as const
      return plainDesign({
        adjusters: {
          gain: { ...base.adjusters.gain!, effect },
          offset: { ...base.adjusters.offset!, effect: { ...effect, offsetPerV: 0.01 * (1 + share) } },
        },
        targetLsb: 1e9,
      })
    }
    expect(refusal(() => computeCodes(cross(1e-10), good)).code).toBe('adjusters-not-independent')
    expect(() => computeCodes(cross(1e-7), good)).not.toThrow()
  })

  test('several ranges: one must be named, and must exist', () => {
    const two = {
      ...base,
      ranges: [
        { ...base.ranges[0]!, id: 'a' },
        { ...base.ranges[0]!, id: 'b' },
      ],
    }
    expect(refusal(() => fitPoints(two, good)).message).toContain('a, b')
    expect(refusal(() => fitPoints(two, good, { rangeId: 'c' })).code).toBe('range-unknown')
    expect(fitPoints(two, good, { rangeId: 'b' }).range).toBe('b')
  })

  test('a design that cannot trim can still be fitted', () => {
    expect(fitPoints(plainDesign({ adjusters: {} }), good).fit.n).toBe(3)
  })
})
