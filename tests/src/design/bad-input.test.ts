import { describe, expect, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { readDocumentText } from '../../../src/features/design-form/document-file.ts'
import { type FormDoc, withTexts } from '../../../src/features/design-form/form-doc.ts'
import { startForm } from '../../../src/features/design-form/form-state.ts'
import { createFormStore } from '../../../src/features/design-form/form-store.ts'
import { checkDraft } from '../../../src/features/design-form/read-form.ts'
import { toForm } from '../../../src/features/design-form/to-form.ts'
import { findNetwork } from '../../../src/lib/find-network.ts'
import { createLiveAnswer } from '../../../src/screens/design-page/live-answer.ts'
import { design } from '../../support/web-fixtures.ts'

/** The bad inputs of the issue on sizing, each at its field of the Design page; tests/cli/bad-designs.test.ts has the same by path. */

const form = toForm(design)
const [gainLine] = form.lines.gain
const [range] = form.ranges

/** What the page says at its fields: of reading, of the solver, of the contract's check. */
function said(doc: FormDoc): { problems: Record<string, string>; remarks: Record<string, string> } {
  const live = createLiveAnswer(createFormStore(startForm(doc)))
  const { said: now, draft } = live.answered(live.view(), null)
  const checked = draft ? checkDraft(doc, draft).problems : new Map()
  return {
    problems: Object.fromEntries([...now.problems, ...checked]),
    remarks: Object.fromEntries(now.remarks),
  }
}
const with_ = (texts: Record<string, string>) => said(withTexts(form, texts))

const cases: [string, Record<string, string>, string, RegExp][] = [
  [
    'an effect of zero',
    { 'gain.slope': '0 /V', 'gain.offsetPerV': '0' },
    'gain.effect',
    /no effect|zero|moves/i,
  ],
  ['a negative resistance', { 'offset.adjust': '-1 Mohm' }, 'offset.adjust', /must be over 0/],
  [
    'a negative limit',
    { [`line.gain.${gainLine!.id}.limit`]: '-5 ppm' },
    `line.gain.${gainLine!.id}.limit`,
    /at least 0/,
  ],
  [
    'adjusters that move the same thing',
    { 'gain.slope': '0 /V', 'gain.offsetPerV': '0.01 V/V' },
    'adjusters',
    /cannot be told apart/,
  ],
  ['τ of 1', { 'gain.known': '100 %' }, 'gain.known', /under 100 %/],
  ['τ over 1', { 'gain.known': '120 %' }, 'gain.known', /under 100 %/],
  ['a range reversed', { [`range.${range!.id}.ends`]: '10 V to 0 V' }, `range.${range!.id}.ends`, /reversed/],
  ['node limits reversed', { 'gain.limits': '5 V to -5 V' }, 'gain.limits', /reversed/],
  ['an auxiliary DAC that spans nothing', { 'gain.span': '1 V to 1 V' }, 'gain.span', /spans nothing/],
  ['converter bits out of bounds', { bits: '25 bits' }, 'bits', /whole number from 4 to 24/],
  ['auxiliary bits out of bounds', { 'gain.bits': '0 bits' }, 'gain.bits', /whole number from/],
  ['bits that are not whole', { bits: '12.5' }, 'bits', /whole number/],
]

test.each(cases)('%s is said at its field', (_, texts, field, words) => {
  const { problems } = with_(texts)
  expect(Object.keys(problems)).toEqual([field])
  expect(problems[field]).toMatch(words)
})

test('a budget with nothing in it is said at the budget, and says what helps', () => {
  const { problems } = said({ ...form, lines: { gain: [], offset: [] } })
  expect(problems).toEqual({ budget: expect.stringMatching(/nothing is to be trimmed\. Add a line/) })
})

test('a node limit inside the needed reach is a remark at the limits; the answer stands', () => {
  const { problems, remarks } = with_({ 'gain.limits': '-5 V to 10 mV' })
  expect(problems).toEqual({})
  expect(remarks['gain.limits']).toMatch(/the limit lies inside the needed reach/)
})

test('a range of the auxiliary DAC that falls with its code is allowed', () => {
  expect(with_({ 'gain.span': '2.5 V to -2.5 V' }).problems).toEqual({})
})

test('a series that cannot meet the request: the nearest is shown, with what stands in the way', () => {
  const request = {
    wantedLowV: -0.3,
    wantedHighV: 0.3,
    series: 'E24',
    tolerance: 0.05,
    maxSourceOhm: 10,
    maxCurrentA: 1e-6,
  } as const
  const found = findNetwork({ design, which: 'gain', request })
  if (!('result' in found)) throw new Error(found.refusal)
  expect(found.result.candidates).toHaveLength(1)
  expect(found.result.obstacle).toMatch(/^No E24 values cover the span with .* The nearest has /)
})

describe('documents', () => {
  test('of another version, of none, and not JSON are refused by name', () => {
    const refused = (text: string) => readDocumentText(text, 'd.json')
    expect(refused(JSON.stringify({ ...design, format: 'ogee.design/2' }))).toEqual({
      refusal: 'd.json is of format ogee.design/2; this page reads ogee.design/1.',
    })
    expect(refused('{}')).toMatchObject({ refusal: expect.stringContaining('states no format') })
    expect(refused('[')).toMatchObject({ refusal: expect.stringContaining('is not JSON') })
  })

  test('10,000 budget lines are answered, the worst case that of the lines', () => {
    const lines = Array.from({ length: 10_000 }, (_, i) => ({ ...gainLine!, id: 100 + i, limit: '0.01 ppm' }))
    const doc = { ...form, lines: { ...form.lines, gain: lines }, nextId: 20_000 }
    const live = createLiveAnswer(createFormStore(startForm(doc)))
    const { answer, said: now } = live.answered(live.view(), null)
    expect([...now.problems.keys()]).toEqual([])
    expect(answer?.size.extents.gain.worstCasePpm).toBeCloseTo(100, 9)
    expect(designDocument.safeParse(answer?.design).success).toBe(true)
  })
})
