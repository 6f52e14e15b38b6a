import { describe, expect, test } from 'vitest'
import { explainSize } from '../../../shared/design-words/explain.ts'
import { verdictSentences } from '../../../shared/design-words/verdict-sentences.ts'
import { type Ladder, ladderAxis, ladderOf, octavesAbove } from '../../../shared/solver/sizing/ladder.ts'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { resolutionSpanTable } from '../../../shared/solver/sizing/span-table.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { AuxSource, Network } from '../../../shared/solver/types.ts'
import { adjuster, handDesign, sizingExample } from './designs.ts'

/** The four states that the ladder's picture shows: unipolar-18 with other bits and resistors. */
const unipolar = sizingExample('unipolar-18')
const divider = (bottomOhm: number): Network => ({ kind: 'divider', topOhm: 8660, bottomOhm })

function state(source: Partial<AuxSource>, network: Network): SizingDesign {
  const gain = unipolar.adjusters.gain!
  return {
    ...unipolar,
    adjusters: { ...unipolar.adjusters, gain: { ...gain, source: { ...gain.source, ...source }, network } },
  }
}
const states = {
  covers: state({}, divider(1500)),
  short: state({}, divider(330)),
  coarse: state({ bits: 8 }, divider(1500)),
  both: state({ bits: 8 }, divider(1000)),
}
const ladder = (design: SizingDesign): Ladder => ladderOf(sizeDesign(design), 'gain', 10)!
const bitsOf = ({ rungs }: Ladder, kind: string) =>
  rungs.filter((rung) => rung.kind === kind).map(({ bit }) => bit)

describe('ladder', () => {
  test('covers: bits 2 to 11 needed, 0 and 1 to spare, 0.33 bit above, 2.35 below', () => {
    const got = ladder(states.covers)
    expect(got.state).toBe('covers')
    expect(bitsOf(got, 'needed')).toEqual([2, 3, 4, 5, 6, 7, 8, 9, 10, 11])
    expect(bitsOf(got, 'spare')).toEqual([0, 1])
    expect(bitsOf(got, 'missing')).toEqual([])
    expect(got.spareAboveBits).toBeCloseTo(0.33, 2)
    expect(got.spareBelowBits).toBeCloseTo(2.35, 2)
    const second = got.rungs[2]!
    expect(second.outputV).toBeCloseTo(14.9e-6, 7)
    expect(second.lsb).toBeCloseTo(0.39, 2)
    expect(got.bracket).toEqual({ bottomV: expect.closeTo(19.07e-6, 8), topV: expect.closeTo(6.094e-3, 6) })
  })

  test('the picture’s offset ladder: bits 0 to 2 needed, nine above to spare', () => {
    const got = ladderOf(sizeDesign(unipolar), 'offset', 10)!
    expect(bitsOf(got, 'needed')).toEqual([0, 1, 2])
    expect(bitsOf(got, 'spare').length).toBe(9)
  })

  test('short: two rungs missing above, bits 0 to 3 to spare', () => {
    const got = ladder(states.short)
    expect(got.state).toBe('short')
    expect(bitsOf(got, 'missing')).toEqual([12, 13])
    expect(bitsOf(got, 'spare')).toEqual([0, 1, 2, 3])
    expect(got.shortBits).toBeCloseTo(1.68, 2)
    expect(got.coarseBits).toBe(0)
  })

  test('coarse: two rungs missing below', () => {
    const got = ladder(states.coarse)
    expect(got.state).toBe('coarse')
    expect(bitsOf(got, 'missing')).toEqual([-1, -2])
    expect(got.coarseBits).toBeCloseTo(1.65, 2)
    expect(got.shortBits).toBe(0)
  })

  test('both: missing on both ends', () => {
    const got = ladder(states.both)
    expect(bitsOf(got, 'missing')).toEqual([-1, -2, 8])
    expect(got.shortBits).toBeCloseTo(0.2, 2)
    expect(got.coarseBits).toBeCloseTo(1.14, 2)
  })

  test('an octave is an octave: rungs stand one apart', () => {
    const { rungs } = ladder(states.covers)
    const axis = ladderAxis([ladder(states.covers)], 10 / 2 ** 18, 10)
    const heights = rungs.map(({ outputV }) => octavesAbove(outputV, axis.bottomV))
    heights.slice(1).forEach((height, i) => {
      expect(height - heights[i]!).toBeCloseTo(1, 12)
    })
    expect(heights[0]).toBeCloseTo(0.5, 12)
    expect(axis.volts.find(({ value }) => value === 1e-3)!.major).toBe(true)
    expect(axis.lsb.some(({ exponent, value }) => exponent === 0 && value === 1)).toBe(true)
    expect(axis.ppm.find(({ value }) => value === 100)!.outputV).toBeCloseTo(1e-3, 15)
  })

  test('no adjuster has no ladder; a budget that asks nothing has no bracket', () => {
    const design = handDesign({
      budget: {
        gain: [],
        offset: [{ name: 'O', limitV: 1e-3, distribution: 'rectangular', when: 'initial' }],
      },
    })
    expect(ladder(design).bracket).toBe(null)
    expect(
      ladderOf(sizeDesign(handDesign({ adjusters: { offset: adjuster({ alpha: 1 }) } })), 'gain', 10),
    ).toBe(null)
  })
})

describe('resolution × span', () => {
  const table = resolutionSpanTable(unipolar, 'gain')!

  test('the picture’s table of the gain adjuster', () => {
    expect(table.columns.map(({ reachSpareBits }) => reachSpareBits!.toFixed(1))).toEqual([
      '-2.0',
      '-1.0',
      '0.3',
      '1.3',
      '2.3',
    ])
    const marks = { covers: 'o', short: 's', coarse: 'c', both: 'b' }
    expect(
      table.rows.map(({ bits, cells }) => `${bits} ${cells.map(({ verdict }) => marks[verdict]).join('')}`),
    ).toEqual(['8 sbccc', '10 ssocc', '12 ssooo', '14 ssooo', '16 ssooo'])
    expect(table.rows[2]!.cells.map(({ own }) => own)).toEqual([false, false, true, false, false])
  })

  test('every cell is what the sizing says of that part', () => {
    for (const { bits, cells } of table.rows) {
      cells.forEach((cell, i) => {
        const { lowV, highV } = table.columns[i]!
        const size = sizeDesign(state({ bits, lowV, highV }, divider(1500))).adjusters.gain!
        expect(cell).toMatchObject({ verdict: size.verdict, stepMargin: size.stepMargin })
      })
    }
  })

  test('spans follow the form of the part: from 0 V, falling, off centre; the own one is among them', () => {
    const ends = (lowV: number, highV: number) => {
      const got = resolutionSpanTable(state({ lowV, highV }, divider(1500)), 'gain')!
      expect(got.columns.filter(({ own }) => own).length).toBe(1)
      return got.columns.map((column) => [column.lowV, column.highV])
    }
    expect(ends(0, 2.5)).toContainEqual([0, 5])
    expect(ends(2.5, -2.5)).toContainEqual([5, -5])
    expect(ends(-1, 3)).toContainEqual([-3, 5])
    expect(resolutionSpanTable({ ...unipolar, adjusters: { gain: unipolar.adjusters.gain } }, 'offset')).toBe(
      null,
    )
  })
})

describe('sentences', () => {
  const gain = (design: SizingDesign) => verdictSentences(design, sizeDesign(design))[0]!

  test('covers', () => {
    expect(gain(states.covers)).toMatchObject({
      headline: 'gain covers',
      plain:
        '12 bits over ±367 mV: reaches 25 % past what the budget asks, steps 5.1 times finer than the target needs.',
      reach: 'Reach 7.63 mV of 6.09 mV needed.',
      step: 'Step 3.73 µV of 19.1 µV allowed.',
      bits: '12 bits hold; 10 would do.',
      remedy: null,
    })
  })

  test('the three others say how many bits and what to change', () => {
    expect(gain(states.short).remedy).toBe('Short of reach: 1.68 bits. Raise R bottom to 1.18 kΩ or more.')
    expect(gain(states.coarse).remedy).toBe('Too coarse: 1.65 bits. Take 10 bits.')
    expect(gain(states.both).remedy).toBe('No span of 8 bits holds the demand. Take 10.')
  })

  test('the resistor that is named covers, and the next lower one of E96 does not', () => {
    expect(sizeDesign(state({}, divider(1180))).adjusters.gain!.verdict).toBe('covers')
    expect(sizeDesign(state({}, divider(1150))).adjusters.gain!.verdict).toBe('short')
  })

  test('a node limit is named as what ends the reach', () => {
    const limited = structuredClone(unipolar)
    limited.adjusters.gain!.node.maxV = 0.1
    expect(gain(limited).remedy).toContain(
      'The limit of the gain node, 100 mV, lies inside the needed reach.',
    )
  })

  test('one adjuster, one entry', () => {
    const design = handDesign({ adjusters: { offset: adjuster({ alpha: 1e-2 }) } })
    expect(verdictSentences(design, sizeDesign(design)).map(({ which }) => which)).toEqual(['offset'])
  })
})

describe('explanations', () => {
  const noisy: SizingDesign = {
    ...unipolar,
    measurement: { ...unipolar.measurement, noiseV: 1e-6, instrument: { gainPpm: 3, offsetV: 2e-6 } },
  }
  const units = [1, 2, 3].map((i) => ({ gainErrorPpm: i, offsetErrorV: i * 1e-6 }))
  const lone = handDesign({ adjusters: { gain: adjuster({ beta: 1e-3 }) } })
  const cases: [string, SizingDesign, ReturnType<typeof sizeDesign>][] = [
    ['unipolar-18 with noise', noisy, sizeDesign(noisy)],
    ['from measured units', noisy, sizeDesign(noisy, { measuredUnits: measuredUnits(units) })],
    ['bipolar-16', sizingExample('bipolar-16'), sizeDesign(sizingExample('bipolar-16'))],
    ['one adjuster', lone, sizeDesign(lone)],
  ]

  test.each(cases)('every number of the answer has formula, inputs and source: %s', (_, design, result) => {
    const bare = numbersIn(result, '').filter((path) => {
      const found = explainSize(design, result, path)
      return !found || found.formula === '' || found.inputs.length === 0 || found.source === ''
    })
    expect(bare).toEqual([])
  })

  test.each(cases)('every field that an explanation points to is in the design: %s', (_, design, result) => {
    const optional = /noiseV$|instrument$|temperatureSpanK$|effectTolerance$|\/sizing/
    const lost = numbersIn(result, '')
      .flatMap((path) => explainSize(design, result, path)!.inputs)
      .flatMap(({ path }) => (path === null || optional.test(path) || at(design, path) ? [] : [path]))
    expect(lost).toEqual([])
  })

  test('a path that is no number explains nothing', () => {
    for (const path of [
      '',
      '/verdict',
      '/adjusters/gain/verdict',
      '/adjusters/gain/toString',
      '/residual/lines/99/worstV',
    ]) {
      expect(explainSize(unipolar, sizeDesign(unipolar), path)).toBe(null)
    }
  })
})

function numbersIn(value: unknown, path: string): string[] {
  if (typeof value === 'number') return [path]
  if (value === null || typeof value !== 'object') return []
  return Object.entries(value).flatMap(([key, part]) => numbersIn(part, `${path}/${key}`))
}

function at(value: unknown, path: string): boolean {
  let here: unknown = value
  for (const key of path.split('/').slice(1)) here = (here as Record<string, unknown> | undefined)?.[key]
  return here !== undefined
}
