import { describe, expect, test } from 'vitest'
import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { evaluateQuantity } from '../../../shared/quantity/arithmetic.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { fieldAt } from '../../../src/features/design-form/field-at.ts'
import { type FormDoc, textOf, withText, withTexts } from '../../../src/features/design-form/form-doc.ts'
import { formReducer, startForm } from '../../../src/features/design-form/form-state.ts'
import { readForm } from '../../../src/features/design-form/read-form.ts'
import type { Arithmetic } from '../../../src/features/design-form/reader.ts'
import { templates } from '../../../src/features/design-form/template-list.ts'
import { fromTemplate } from '../../../src/features/design-form/templates.ts'
import { toForm } from '../../../src/features/design-form/to-form.ts'
import { design } from '../../support/web-fixtures.ts'

const arithmetic: Arithmetic = (text, field) => {
  const { value, unit } = evaluateQuantity(text, field)
  return { value, unit }
}
const read = (doc: FormDoc) => readForm(doc, arithmetic)
const form = toForm(design)
const with_ = (texts: Record<string, string>) => read(withTexts(form, texts))

/** A repeatable generator of doubles of every size. */
function doubles(seed: number) {
  let state = seed
  const next = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0
    return state / 2 ** 32
  }
  return { unit: next, sized: () => (next() + 2 ** -33) * 10 ** Math.floor(next() * 12 - 6) }
}

describe('a document as texts and back', () => {
  test('the example reads back as it was', () => {
    const back = read(form)
    expect(Object.fromEntries(back.problems)).toEqual({})
    expect(back.document).toEqual(design)
    expect(textOf(form, 'gain.rs')).toBe('8.66k / 1.5k')
    expect(textOf(form, 'gain.slope')).toBe('2.08e-3 /V')
    expect(textOf(form, 'points')).toBe('5 even')
  })

  test('300 designs of random doubles come back bit for bit, through the exported text too', () => {
    for (let seed = 1; seed <= 300; seed++) {
      const document = randomDesign(seed)
      const exported = JSON.stringify(document)
      const imported = designDocument.parse(JSON.parse(exported))
      const back = read(toForm(imported))
      expect(Object.fromEntries(back.problems)).toEqual({})
      expect(back.document).toEqual(document)
    }
  })

  test('ranges, their own effects, channels and a missing adjuster are kept', () => {
    const { offset: _, ...rest } = design.adjusters
    const document = designDocument.parse({
      ...design,
      adjusters: rest,
      channels: ['A', 'B 2'],
      ranges: [
        { id: 'u10', lowV: 0, highV: 10, sharedWith: ['u5'], label: 'ten volts' },
        { id: 'u5', lowV: 0, highV: 5, effects: { gain: { kind: 'measured', slopePerV: 0.001 } } },
      ],
      sizing: undefined,
      decision: undefined,
      budget: { gain: [], offset: [] },
    })
    expect(read(toForm(document)).document).toEqual(JSON.parse(JSON.stringify(document)))
  })

  test('an effect of a range of its own is typed, measured or from circuit values, and goes with its range', () => {
    const summing = { kind: 'output-summing', feedbackOhm: 1e4, adjustOhm: 2e6, inverting: true } as const
    const document = designDocument.parse({
      ...design,
      ranges: [
        design.ranges[0],
        {
          id: 'b5',
          lowV: -5,
          highV: 5,
          effects: { gain: { kind: 'measured', slopePerV: -1e-3, offsetPerV: 0 }, offset: summing },
        },
      ],
    })
    const texts = toForm(document)
    const { id } = texts.ranges[1]!
    expect(texts.values).toMatchObject({
      [`range.${id}.gain.slope`]: '-1e-3 /V',
      [`range.${id}.offset.effect`]: 'output-summing',
      [`range.${id}.offset.adjust`]: '2 Mohm',
    })
    expect(read(texts).document).toEqual(document)
    const typed = read(
      withTexts(texts, {
        [`range.${id}.gain.effect`]: 'reference-summing',
        [`range.${id}.gain.inputR`]: '10k',
        [`range.${id}.gain.adjust`]: '1M',
        [`range.${id}.gain.reference`]: '5 V',
        [`range.${id}.offset.adjust`]: '820k',
        [`range.${id}.offset.sign`]: 'not-inverting',
      }),
    )
    expect(typed.document?.ranges[1]?.effects).toEqual({
      gain: {
        kind: 'reference-summing',
        inputOhm: 1e4,
        adjustOhm: 1e6,
        referenceV: 5,
        inverting: true,
        pivotV: 0,
      },
      offset: { ...summing, adjustOhm: 820e3, inverting: false },
    })
    const wrong = read(withText(texts, `range.${id}.offset.feedback`, '4 mV'))
    expect([...wrong.problems.keys()]).toEqual([`range.${id}.offset.feedback`])
    expect(fieldAt(texts, '/ranges/1/effects/gain/slopePerV')).toBe(`range.${id}.gain.slope`)
    const without = formReducer(startForm(texts), { do: 'remove-range', id }).doc
    expect(Object.keys(without.values).filter((name) => name.startsWith('range.'))).toEqual([])
  })

  test('any k of a normal line is typed; without one it is said to be missing', () => {
    const line = `line.offset.${form.lines.offset[0]!.id}`
    const other = withTexts(form, { [`${line}.shape`]: 'normal ' })
    expect(Object.fromEntries(read(other).problems)).toEqual({ [`${line}.k`]: 'k is missing.' })
    const typed = withText(other, `${line}.k`, '3.3')
    expect(textOf(typed, `${line}.k`)).toBe('3.3')
    expect(read(typed).document?.budget?.offset[0]).toMatchObject({ distribution: 'normal', k: 3.3 })
    expect(textOf(toForm(read(typed).document!), `${line}.k`)).toBe('3.3')
    expect(read(withText(other, `${line}.k`, '0')).problems.get(`${line}.k`)).toBe(
      'k is 0; it must be over 0.',
    )
    expect(fieldAt(typed, '/budget/offset/0/k')).toBe(`${line}.k`)
    expect(fieldAt(form, '/budget/offset/0/k')).toBe(`${line}.shape`)
  })
})

function randomDesign(seed: number): Design {
  const { unit, sized } = doubles(seed)
  const low = -sized()
  return designDocument.parse({
    ...design,
    ranges: [{ id: 'r', lowV: low, highV: low + sized(), offsetAt: 'low-end' }],
    adjusters: {
      gain: {
        effect: {
          kind: 'reference-summing',
          inputOhm: sized(),
          adjustOhm: sized(),
          referenceV: -sized(),
          inverting: false,
          pivotV: sized(),
        },
        effectTolerance: unit(),
        node: { nominalV: 0, maxV: sized() },
        source: { ...design.adjusters.gain!.source, lowV: -sized(), spanTolerance: unit() },
        network: { kind: 'shifted', topOhm: sized(), shiftOhm: sized(), shiftV: -sized() },
      },
      offset: {
        effect: { kind: 'measured', slopePerV: sized(), offsetPerV: -sized() },
        effectTolerance: unit(),
        node: { nominalV: -sized(), returnV: sized(), inputOhm: sized() },
        source: design.adjusters.offset!.source,
        network: { kind: 'divider', topOhm: sized(), bottomOhm: sized() },
      },
    },
    budget: {
      gain: [
        { name: 'A', limitPpm: sized(), distribution: 'normal', k: sized(), when: 'noise', pivotV: -sized() },
      ],
      offset: [{ name: 'B', limitV: sized(), distribution: 'arcsine', when: 'drift', nominalV: -sized() }],
    },
    sizing: { combine: 'rss', margin: unit() * 2, temperatureSpanK: sized() },
    target: { residual: { value: sized(), unit: 'V' } },
    measurement: {
      ...design.measurement,
      noiseV: sized(),
      instrument: { gainPpm: sized(), offsetV: sized() },
    },
    decision: { rule: 'simple', tolerance: { value: sized(), unit: 'ppm' } },
  })
}

describe('what is typed stays and is read', () => {
  test.each([
    ['bits', '16', (d: Design) => d.converter.bits, 16],
    ['gain.span', '±5 V', (d: Design) => d.adjusters.gain?.source.lowV, -5],
    ['gain.span', '0 to 4.096', (d: Design) => d.adjusters.gain?.source.highV, 4.096],
    ['gain.rs', '10k / 2k2 ', () => 0, null],
    ['gain.inlDrift', '7 ppm/K', (d: Design) => d.adjusters.gain?.source.driftPpmPerK, 7],
    ['target', '20 uV', (d: Design) => d.target.residual, { value: 20e-6, unit: 'V' }],
    ['target', '2 ppm', (d: Design) => d.target.residual, { value: 2, unit: 'ppm' }],
    ['margin', '12.5', (d: Design) => d.sizing?.margin, 0.125],
    ['gain.known', '2e5 ppm', (d: Design) => d.adjusters.gain?.effectTolerance, 0.2],
    ['points', '0, 0x10000, 262143', (d: Design) => d.measurement.points, [0, 65536, 262143]],
    ['gain.nodeInput', '500 kohm / 2', (d: Design) => d.adjusters.gain?.node.inputOhm, 250000],
    ['gain.limits', 'none to 4 V', (d: Design) => d.adjusters.gain?.node.maxV, 4],
  ] as const)('%s: %s', (field, text, from, wanted) => {
    const { document, problems } = with_({ [field]: text })
    if (wanted === null) {
      expect(problems.get(field)).toMatch(/2k2/)
      return
    }
    expect(Object.fromEntries(problems)).toEqual({})
    expect((from as (d: Design) => unknown)(document!)).toEqual(wanted)
  })

  test('arithmetic that is not loaded yet is pending and no error', () => {
    const reading = readForm(withText(form, 'gain.nodeInput', '2 * 10 kohm'), () => 'pending')
    expect(reading).toMatchObject({ document: null, isPending: true })
    expect(reading.problems.size).toBe(0)
  })
})

const gainLine = form.lines.gain[0]!.id
const limit = `line.gain.${gainLine}.limit`

describe('bad input stands at its field, in a sentence', () => {
  test.each([
    ['bits', '', 'Resolution is missing.'],
    ['bits', '25', 'Resolution takes a whole number from 4 to 24 bits.'],
    ['bits', '12.5', 'Resolution takes a whole number from 4 to 24 bits.'],
    ['gain.bits', '0', 'Auxiliary DAC takes a whole number from 1 to 24 bits.'],
    ['range.1.ends', '10 V to 0 V', 'The range is reversed: its second end must be above the first.'],
    ['range.1.ends', '10 V', 'Range takes two ends. Write it like -2.5 V to 2.5 V.'],
    [limit, '30 uV', 'Limit takes ppm or %. 30 uV is a voltage.'],
    [limit, '', 'Limit is missing.'],
    [limit, '1,2 ppm', '1,2 ppm: write 1.2 ppm.'],
    [limit, '-1 ppm', 'Limit is -1 ppm; it must be at least 0.'],
    ['gain.known', '100 %', 'Known to is 100 %; it must be under 100 %.'],
    ['offset.feedback', '0', 'R feedback is 0; it must be over 0.'],
    ['offset.adjust', '-1k', 'R adjust is -1k; it must be over 0.'],
    ['offset.span', '2 V to 2 V', 'The auxiliary DAC spans nothing: its two ends are the same voltage.'],
    ['target', '0 LSB', 'Residual target is 0 LSB; it must be over 0.'],
    ['margin', '-1 %', 'Margin is -1 %; it must be at least 0.'],
    ['points', '5', 'Two different codes are the least that gives a line.'],
    ['points', '0, 262144', 'Code 262144 does not exist: the highest is 262143.'],
    ['gain.limits', '5 V to -5 V', 'Node limits are reversed: the second must be above the first.'],
    ['title', ' ', 'Title is missing.'],
  ])('%s = "%s"', (field, text, sentence) => {
    const { document, problems } = with_({ [field]: text })
    expect(document).toBeNull()
    expect(Object.fromEntries(problems)).toEqual({ [field]: sentence })
  })

  test.each([
    ['a zero effect', { 'gain.slope': '0', 'gain.offsetPerV': '0' }, 'gain.effect'],
    [
      'adjusters that move the same thing',
      {
        'gain.slope': '0',
        'gain.offsetPerV': '0.01 V/V',
      },
      'adjusters',
    ],
    ['a budget with nothing in it', { [limit]: '0', [`line.gain.${gainLine + 1}.limit`]: '0' }, 'budget'],
  ])('%s is refused by the solver and finds its field', (_, texts: Record<string, string>, field) => {
    const bare = field === 'budget' ? { [`line.offset.${form.lines.offset[0]!.id}.limit`]: '0' } : {}
    const { document } = with_({ ...texts, ...bare })
    expect(document).not.toBeNull()
    let places: string[] = []
    try {
      sizeDesign(document!)
    } catch (error) {
      places = (error as { errors: { path: string }[] }).errors.map(({ path }) => fieldAt(form, path))
    }
    expect(places).toEqual([field])
  })

  test('a node limit inside the needed reach is a remark at the limits', () => {
    const { document } = with_({ 'gain.limits': '-0.1 V to 0.1 V' })
    const { remarks } = sizeDesign(document!)
    expect(remarks.map(({ path }) => fieldAt(form, path))).toEqual(['gain.limits', 'gain.limits'])
  })

  test('10,000 budget lines are read, and a change in one reads one', () => {
    let reads = 0
    const counting: Arithmetic = () => {
      reads++
      return { value: 1, unit: 'ppm' }
    }
    const lines = Array.from({ length: 10_000 }, (_, i) => ({
      ...form.lines.gain[0]!,
      id: 100 + i,
      limit: '0.5 + 0.5 ppm',
    }))
    const many: FormDoc = { ...form, lines: { ...form.lines, gain: lines } }
    expect(readForm(many, counting).document?.budget?.gain.length).toBe(10_000)
    expect(reads).toBe(10_000)
    readForm(withText(many, 'line.gain.5000.limit', '2 * 1 ppm'), counting)
    expect(reads).toBe(10_001)
    const tooMany = { ...many, lines: { ...many.lines, gain: [...lines, { ...lines[0]!, id: 99_999 }] } }
    expect([...readForm(tooMany, counting).problems.keys()]).toEqual(['budget.gain'])
  })
})

describe('steps', () => {
  test('keys in one field are one step; every step goes back and forth', () => {
    let state = startForm(form)
    for (const text of ['1', '16', '16 b']) state = formReducer(state, { do: 'set', field: 'bits', text })
    state = formReducer(state, { do: 'set', field: 'target', text: '1 LSB' })
    state = formReducer(state, { do: 'leave' })
    state = formReducer(state, { do: 'set', field: 'target', text: '2 LSB' })
    const last = state.doc
    state = formReducer(state, { do: 'undo' })
    expect(textOf(state.doc, 'target')).toBe('1 LSB')
    state = formReducer(state, { do: 'undo' })
    expect(textOf(state.doc, 'bits')).toBe('16 b')
    state = formReducer(state, { do: 'undo' })
    expect(state.doc).toBe(form)
    expect(formReducer(state, { do: 'undo' })).toBe(state)
    for (let i = 0; i < 3; i++) state = formReducer(state, { do: 'redo' })
    expect(state.doc).toBe(last)
  })

  test('a thousand steps deep', () => {
    let state = startForm(form)
    for (let i = 0; i < 1000; i++) {
      state = formReducer(state, { do: 'set-all', texts: { bits: `${i}` } })
    }
    for (let i = 0; i < 1000; i++) state = formReducer(state, { do: 'undo' })
    expect(state.doc).toBe(form)
  })

  test('lines are added below, moved and taken away, each one step', () => {
    let state = startForm(form)
    const first = form.lines.gain[0]!.id
    state = formReducer(state, { do: 'add-line', which: 'gain', after: first })
    const added = state.doc.lines.gain[1]!
    expect(added.name).toBe('')
    state = formReducer(state, { do: 'move-line', which: 'gain', id: added.id, by: -1 })
    expect(state.doc.lines.gain[0]!.id).toBe(added.id)
    expect(formReducer(state, { do: 'move-line', which: 'gain', id: added.id, by: -1 })).toBe(state)
    state = formReducer(state, { do: 'remove-line', which: 'gain', id: added.id })
    expect(state.doc.lines.gain).toEqual(form.lines.gain)
    for (let i = 0; i < 3; i++) state = formReducer(state, { do: 'undo' })
    expect(state.doc).toBe(form)
  })

  test('what is tried can be kept or dropped', () => {
    const tried = withText(form, 'gain.bits', '14 bits')
    const state = formReducer(startForm(form), { do: 'try', doc: tried })
    expect(state.before).toBe(form)
    expect(formReducer(state, { do: 'keep-tried' })).toMatchObject({ doc: tried, before: null })
    expect(formReducer(state, { do: 'drop-tried' })).toMatchObject({ doc: form, before: null })
  })
})

test.each(templates)('template $name: with resolution and range it covers', ({ name }) => {
  const doc = fromTemplate(name, 'New')
  expect(textOf(doc, 'bits') + textOf(doc, 'range.1.ends')).toBe('')
  const ends = name === 'bipolar' ? '-10 V to 10 V' : '0 V to 10 V'
  const { document, problems } = read(withTexts(doc, { bits: '18', 'range.1.ends': ends, target: '0.5 LSB' }))
  expect(Object.fromEntries(problems)).toEqual({})
  expect(sizeDesign(document!).verdict).toBe('covers')
})
