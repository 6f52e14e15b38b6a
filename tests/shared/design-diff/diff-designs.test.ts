import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import * as z from 'zod'
import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { designDifference } from '../../../shared/contract/revisions.ts'
import { diffDesigns } from '../../../shared/design-diff/diff-designs.ts'
import { isNamed, valueText } from '../../../shared/design-diff/fields.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { unipolar } from '../../support/server-factories.ts'

const lines = {
  gain: [
    { name: 'Converter', limitPpm: 120, distribution: 'rectangular', when: 'initial' },
    { name: 'Reference', limitPpm: 250, distribution: 'rectangular', when: 'initial' },
  ],
  offset: [{ name: 'Amplifier', limitV: 0.00003, distribution: 'normal', k: 2, when: 'initial' }],
} as const
const base = (): Design => designDocument.parse(unipolar({ budget: structuredClone(lines) as never }))
/** The base with something done to it, checked again as everything that is stored is. */
const changed = (change: (design: Design) => void): Design => {
  const design = base()
  change(design)
  return designDocument.parse(JSON.parse(JSON.stringify(design)))
}
const sentences = (before: Design, after: Design) =>
  diffDesigns(before, after).changes.map(({ path, kind, sentence }) => [path, kind, sentence])

describe('the differences of two designs', () => {
  it.each<[string, (design: Design) => void, [string, string, string][]]>([
    [
      'a number with its unit',
      (d) => {
        d.adjusters.gain!.source.bits = 14
        d.adjusters.gain!.network = { kind: 'divider', topOhm: 8661, bottomOhm: 1500 }
        d.adjusters.gain!.source.lowV = -2.4999999
      },
      [
        ['/adjusters/gain/source/bits', 'changed', 'Gain adjuster, auxiliary DAC, bits: from 12 to 14.'],
        [
          '/adjusters/gain/source/lowV',
          'changed',
          'Gain adjuster, auxiliary DAC, low end: from −2.5 V to −2.4999999 V.',
        ],
        [
          '/adjusters/gain/network/topOhm',
          'changed',
          'Gain adjuster, network, top resistor: from 8.66 kΩ to 8.661 kΩ.',
        ],
      ],
    ],
    [
      'another kind: its fields come and go',
      (d) => {
        d.adjusters.gain!.network = { kind: 'direct' }
      },
      [
        ['/adjusters/gain/network/kind', 'changed', 'Gain adjuster, network, kind: from divider to direct.'],
        [
          '/adjusters/gain/network/topOhm',
          'removed',
          'Gain adjuster, network, top resistor: removed, was 8.66 kΩ.',
        ],
        [
          '/adjusters/gain/network/bottomOhm',
          'removed',
          'Gain adjuster, network, bottom resistor: removed, was 1.5 kΩ.',
        ],
      ],
    ],
    [
      'budget lines by name, wherever they stand',
      (d) => {
        d.budget!.gain = [
          { name: 'New', limitPpm: 7, distribution: 'normal', k: 2, when: 'drift' },
          { ...d.budget!.gain[1]!, limitPpm: 200 },
        ]
      },
      [
        ['/budget/gain/0', 'added', 'Gain budget, New: added, ±7 ppm, normal, k = 2, drift.'],
        ['/budget/gain/1/limitPpm', 'changed', 'Gain budget, Reference, limit: from 250 ppm to 200 ppm.'],
        ['/budget/gain/0', 'removed', 'Gain budget, Converter: removed, was ±120 ppm, rectangular, initial.'],
      ],
    ],
    [
      'ranges by id, and what they have of their own',
      (d) => {
        d.ranges.push({ id: 'u5', lowV: 0, highV: 5, offsetAt: 'zero-volts' })
        d.ranges[0]!.effects = { gain: { kind: 'measured', slopePerV: 0.003, offsetPerV: 0 } }
      },
      [
        ['/ranges/0/effects/gain', 'added', 'Range u10, own effect on gain: added, measured.'],
        ['/ranges/1', 'added', 'Range u5: added, 0 V to 5 V.'],
      ],
    ],
    [
      'an adjuster that goes, limits with their unit, ratios as percent, lists, titles as typed',
      (d) => {
        delete d.adjusters.offset
        d.title = 'Source A-2'
        d.channels = ['a-1', 'b']
        d.adjusters.gain!.effectTolerance = 0.07
        d.target.residual = { value: 20, unit: 'ppm' }
        d.sizing = { combine: 'rss', margin: 0.25, temperatureSpanK: 20 }
        d.budget!.offset = []
      },
      [
        ['/title', 'changed', 'Title: from Detector bias source, output A to Source A-2.'],
        ['/channels', 'changed', 'Channels: from 1 to a-1, b.'],
        ['/adjusters/gain/effectTolerance', 'changed', 'Gain adjuster, effect known to: from 20 % to 7 %.'],
        ['/adjusters/offset', 'removed', 'Offset adjuster: removed, was 12 bits, −2.5 V to 2.5 V.'],
        [
          '/budget/offset/0',
          'removed',
          'Offset budget, Amplifier: removed, was ±30 µV, normal, k = 2, initial.',
        ],
        ['/target/residual', 'changed', 'Target, residual: from 0.5 LSB to 20 ppm.'],
        ['/sizing/combine', 'added', 'Sizing, combined by: added, rss.'],
        ['/sizing/margin', 'added', 'Sizing, margin: added, 25 %.'],
        ['/sizing/temperatureSpanK', 'added', 'Sizing, temperature span: added, 20 K.'],
      ],
    ],
  ])('are told: %s', (_, change, expected) => {
    const told = sentences(base(), changed(change))
    expect(told).toHaveLength(expected.length)
    expect(told).toEqual(expect.arrayContaining(expected))
  })

  it('are none for moved lines and ranges, and for a default that is written out', () => {
    const moved = changed((d) => {
      d.budget!.gain.reverse()
    })
    expect(diffDesigns(base(), moved).changes).toEqual([])
    const bare = designDocument.parse(unipolar())
    const written = designDocument.parse(unipolar({ channels: ['1'] }))
    expect(diffDesigns(bare, written).changes).toEqual([])
  })

  it('tell two lines of one name apart by their order', () => {
    const twice = (limitPpm: number) =>
      changed((d) => {
        d.budget!.gain = [d.budget!.gain[0]!, { ...d.budget!.gain[0]!, limitPpm }]
      })
    expect(sentences(twice(5), twice(6))).toEqual([
      ['/budget/gain/1/limitPpm', 'changed', 'Gain budget, Converter, limit: from 5 ppm to 6 ppm.'],
    ])
  })

  it('take 10 000 lines', () => {
    const many = (limitPpm: number) =>
      changed((d) => {
        d.budget!.gain = Array.from({ length: 10_000 }, (_, i) => ({
          name: `Line ${i}`,
          limitPpm: i === 9_999 ? limitPpm : 1,
          distribution: 'rectangular' as const,
          when: 'initial' as const,
        }))
      })
    expect(sentences(many(1), many(2))).toEqual([
      ['/budget/gain/9999/limitPpm', 'changed', 'Gain budget, Line 9999, limit: from 1 ppm to 2 ppm.'],
    ])
  })
})

describe('the effect on the answer', () => {
  it('has verdict, bits, span and worst residual of both, as the sizing gives them, and says what moved', () => {
    const before = base()
    const after = changed((d) => {
      d.budget!.gain[1]!.limitPpm = 9_000
      d.adjusters.offset!.source.bits = 14
    })
    const { effects } = diffDesigns(before, after)
    expect(effects).toHaveLength(1)
    const [effect] = effects
    for (const [design, answer] of [
      [before, effect!.before],
      [after, effect!.after],
    ] as const) {
      const size = sizeDesign(design)
      expect(answer).toMatchObject({
        sized: true,
        verdict: size.verdict,
        targetV: size.targetV,
        worstResidualV: size.residual.worstCaseV,
        worstResidualLsb: size.residual.worstCaseLsb,
        adjusters: {
          gain: { verdict: size.adjusters.gain!.verdict, requiredBits: size.adjusters.gain!.requiredBits },
          offset: { bits: size.adjusters.offset!.available.bits },
        },
      })
    }
    expect(effect!.sentences).toEqual(
      expect.arrayContaining([
        'Gain short of reach, before covers.',
        'Offset has 14 bits, before 12 bits.',
        expect.stringMatching(/^Worst residual .* LSB\), before .* LSB\)\.$/),
      ]),
    )
  })

  it('says why one of them cannot be sized, and which ranges came and went', () => {
    const bare = designDocument.parse(unipolar())
    const { effects } = diffDesigns(base(), bare)
    expect(effects[0]).toMatchObject({
      before: { sized: true },
      after: { sized: false, code: 'budget-empty' },
    })
    expect(effects[0]!.sentences[0]).toMatch(/^Cannot be sized: The budget/)
    expect(diffDesigns(bare, base()).effects[0]!.sentences[0]).toMatch(/^Can be sized now: /)
    const two = changed((d) => {
      d.ranges = [{ id: 'u5', lowV: 0, highV: 5, offsetAt: 'zero-volts' }]
    })
    expect(diffDesigns(base(), two).effects.map(({ range, sentences }) => [range, sentences])).toEqual([
      ['u5', ['Range u5 is new.']],
      ['u10', ['Range u10 is gone.']],
    ])
  })
})

/** Every number of a design by its place, so that a property can change any of them. */
function numbersOf(
  value: unknown,
  path: readonly (string | number)[] = [],
): (readonly (string | number)[])[] {
  if (typeof value === 'number') return [path]
  if (typeof value !== 'object' || value === null) return []
  return Object.entries(value).flatMap(([key, inner]) => numbersOf(inner, [...path, key]))
}

describe('for any design', () => {
  const paths = numbersOf(base()).filter((path) => path[0] !== 'measurement' || path[1] !== 'points')

  it('one changed number is one change at its own pointer, the other way round the same with sides exchanged', () => {
    let checked = 0
    fc.assert(
      fc.property(
        fc.constantFrom(...paths),
        fc.double({ min: 1e-9, max: 1e3, noNaN: true }),
        (path, value) => {
          const copy = structuredClone(base()) as never as Record<string, never>
          const parent = path
            .slice(0, -1)
            .reduce<Record<string, unknown>>((at, key) => at[key] as never, copy)
          const old = parent[path.at(-1)!]
          parent[path.at(-1)!] = value
          const parsed = designDocument.safeParse(copy)
          if (!parsed.success || value === old) return
          checked++
          const forth = diffDesigns(base(), parsed.data)
          expect(forth.changes).toHaveLength(1)
          expect(designDifference.safeParse(forth).success).toBe(true)
          const [change] = forth.changes
          const pointer = `/${path.filter((key) => key !== 'value' || path[1] !== 'residual').join('/')}`
          expect(pointer.startsWith(change!.path)).toBe(true)
          expect(change!.before).not.toBe(change!.after)
          const back = diffDesigns(parsed.data, base()).changes[0]!
          expect([back.before, back.after]).toEqual([change!.after, change!.before])
        },
      ),
      { numRuns: 300 },
    )
    expect(checked).toBeGreaterThan(50)
  })

  it('every field of the schema has words of its own', () => {
    const schema = JSON.stringify(z.toJSONSchema(designDocument, { io: 'input', unrepresentable: 'any' }))
    const keys = new Set<string>()
    const collect = (value: unknown): void => {
      if (typeof value !== 'object' || value === null) return
      const { properties } = value as { properties?: object }
      for (const key of Object.keys(properties ?? {})) keys.add(key)
      for (const inner of Object.values(value)) collect(inner)
    }
    collect(JSON.parse(schema))
    expect(keys.size).toBeGreaterThan(40)
    // A limit is one value with its unit, which needs no words for its parts.
    const nameless = [...keys].filter((key) => !isNamed(key) && key !== 'value' && key !== 'unit')
    expect(nameless).toEqual([])
  })

  it.each([
    ['slopePerV', 0.00208, '0.00208 1/V'],
    ['driftPpmPerK', 5, '5 ppm/K'],
    ['plausiblePercent', 5, '5 %'],
    ['noiseV', 1.5e-6, '1.5 µV'],
    ['settleLimitLsb', 0.25, '0.25 LSB'],
    ['margin', 0.29, '29 %'],
    ['inverting', true, 'yes'],
    ['rule', 'guarded', 'guarded'],
    ['coding', 'offset-binary', 'offset binary'],
    ['label', 'A-1', 'A-1'],
    ['k', 2, '2'],
    ['sharedWith', [], 'none'],
  ])('%s %j reads %s', (key, value, text) => {
    expect(valueText(key, value)).toBe(text)
  })
})
