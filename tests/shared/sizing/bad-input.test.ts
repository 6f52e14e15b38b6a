import { describe, expect, test } from 'vitest'
import { OgeeError } from '../../../shared/errors.ts'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { adjuster, handDesign } from './designs.ts'

/** Every refusal: its code, and the field it stands at. */
function refusal(design: SizingDesign, options = {}): OgeeError {
  try {
    sizeDesign(design, options)
  } catch (error) {
    if (error instanceof OgeeError) return error
    throw error
  }
  throw new Error('nothing was refused')
}

const offsets = (change: Parameters<typeof adjuster>[0]) =>
  handDesign({ adjusters: { offset: adjuster({ alpha: 1e-2, ...change }) } })
const line = { name: 'O', limitV: 1e-3, distribution: 'rectangular', when: 'initial' } as const
const budget = (change: object) => handDesign({ budget: { gain: [], offset: [{ ...line, ...change }] } })

const cases: [string, SizingDesign, string, string][] = [
  ['an effect of zero', offsets({ alpha: 0 }), 'effect-zero', '/adjusters/offset/effect'],
  [
    'a negative resistance in the effect',
    offsets({ effect: { kind: 'output-summing', feedbackOhm: 1e4, adjustOhm: -1, inverting: true } }),
    'resistance-not-positive',
    '/adjusters/offset/effect/adjustOhm',
  ],
  [
    'adjusters that move the same thing',
    handDesign({ adjusters: { gain: adjuster({ alpha: 1e-2 }), offset: adjuster({ alpha: 2e-2 }) } }),
    'adjusters-not-independent',
    '/adjusters',
  ],
  [
    'a lone gain adjuster without effect where it must null',
    handDesign({ adjusters: { gain: adjuster({ alpha: -(10 - 10 / 65536), beta: 1 }) } }),
    'adjuster-without-effect',
    '/adjusters/gain/effect',
  ],
  ['no budget', handDesign({ budget: undefined }), 'budget-empty', '/budget'],
  ['a budget without lines', handDesign({ budget: { gain: [], offset: [] } }), 'budget-empty', '/budget'],
  ['a budget of noise alone', budget({ when: 'noise' }), 'budget-empty', '/budget'],
  ['a budget of zeros', budget({ limitV: 0 }), 'budget-empty', '/budget'],
  ['a negative limit', budget({ limitV: -1 }), 'budget-line', '/budget/offset/0/limitV'],
  ['a limit that is not finite', budget({ limitV: Number.NaN }), 'budget-line', '/budget/offset/0/limitV'],
  [
    'a nominal that is not finite',
    budget({ nominalV: Infinity }),
    'budget-line',
    '/budget/offset/0/nominalV',
  ],
  ['a normal line without k', budget({ distribution: 'normal' }), 'budget-line', '/budget/offset/0/k'],
  [
    'τ of 1: an endless reach',
    offsets({ effectTolerance: 1 }),
    'tolerance-out-of-bounds',
    '/adjusters/offset/effectTolerance',
  ],
  [
    'a range reversed',
    handDesign({ ranges: [{ id: 'r', lowV: 10, highV: 0 }] }),
    'range-reversed',
    '/ranges/0/highV',
  ],
  [
    'an auxiliary DAC that spans nothing',
    offsets({ source: { highV: -1 } }),
    'source-span-zero',
    '/adjusters/offset/source/highV',
  ],
  [
    'converter bits out of bounds',
    handDesign({ converter: { bits: 25, coding: 'straight-binary' } }),
    'bits-out-of-bounds',
    '/converter/bits',
  ],
  [
    'auxiliary bits out of bounds',
    offsets({ source: { bits: 0 } }),
    'bits-out-of-bounds',
    '/adjusters/offset/source/bits',
  ],
  [
    'a target of zero',
    handDesign({ target: { residual: { value: 0, unit: 'V' } } }),
    'invalid-document',
    '/target/residual/value',
  ],
  ['a negative margin', handDesign({ sizing: { margin: -1 } }), 'invalid-document', '/sizing/margin'],
  ['no adjuster', handDesign({ adjusters: {} }), 'no-adjuster', '/adjusters'],
]

test.each(cases)('%s', (_, design, code, path) => {
  const error = refusal(design)
  expect(error.code).toBe(code)
  expect(error.exit).toBe(65)
  expect(error.errors.map((field) => field.path)).toEqual([path])
  expect(error.message.length).toBeGreaterThan(20)
})

describe('measured units', () => {
  test('fewer than two show no spread', () => {
    const one = [{ gainErrorPpm: 1, offsetErrorV: 0 }]
    for (const few of [[], one]) {
      expect(() => measuredUnits(few)).toThrow(expect.objectContaining({ code: 'too-few-units', exit: 65 }))
    }
  })

  test('they stand in for a missing budget', () => {
    const units = [1, 2, 4].map((i) => ({ gainErrorPpm: 100 * i, offsetErrorV: 1e-4 * i }))
    const result = sizeDesign(handDesign({ budget: undefined }), { measuredUnits: measuredUnits(units) })
    expect(result.adjusters.gain!.requiredBits).toBeGreaterThan(1)
  })
})

test('ten thousand lines: every number finite, the sum that of the lines', () => {
  const gain = Array.from({ length: 10_000 }, (_, i) => ({
    name: `L${i}`,
    limitPpm: 0.01,
    distribution: 'triangular' as const,
    when: i % 2 === 0 ? ('initial' as const) : ('drift' as const),
  }))
  const result = sizeDesign(handDesign({ budget: { gain, offset: [] } }))
  expect(result.extents.gain.worstCasePpm).toBeCloseTo(100, 9)
  expect(result.residual.lines.length).toBe(5002)
  expect(numbersIn(result).every(Number.isFinite)).toBe(true)
})

function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value]
  return value !== null && typeof value === 'object' ? Object.values(value).flatMap(numbersIn) : []
}
