import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { parseCode } from '../../../shared/quantity/code.ts'
import { evenCodes } from './even-codes.ts'
import { fieldAt } from './field-at.ts'
import { both, type FormDoc, type RangeTexts, rangeEffect, rangeField, type Which } from './form-doc.ts'
import { readAdjuster, readEffect } from './read-adjuster.ts'
import { readLines } from './read-lines.ts'
import {
  type Arithmetic,
  newReader,
  type Reader,
  readEnds,
  readFraction,
  readMixed,
  readNumber,
  readQuantity,
  readWhole,
  stated,
  wrong,
} from './reader.ts'
import { remembered, textsUnder } from './remembered.ts'

export type Reading = {
  /** As read and not yet checked against the contract; null while anything is in error or not yet computed. */
  draft: Design | null
  problems: ReadonlyMap<string, string>
  isPending: boolean
}

/**
 * The fields of the form as a document: enough for the solver, which checks what it needs. The check against the whole
 * contract takes some milliseconds, more than a key may; see `checkDraft`.
 */
export function readFields(doc: FormDoc, arithmetic: Arithmetic): Reading {
  const reader = newReader(arithmetic)
  const raw = readDocument(reader, doc)
  const { problems, isPending } = reader
  return { draft: problems.size > 0 || isPending ? null : (raw as Design), problems, isPending }
}

export type Checked = { document: Design | null; problems: ReadonlyMap<string, string> }

/** The document by the contract, or what is wrong at which field. */
export function checkDraft(doc: FormDoc, draft: Design): Checked {
  const problems = new Map<string, string>()
  const parsed = designDocument.safeParse(draft)
  if (parsed.success) return { document: parsed.data, problems }
  for (const { path, message } of parsed.error.issues) {
    const field = fieldAt(doc, `/${path.map(String).join('/')}`)
    if (!problems.has(field)) problems.set(field, message)
  }
  return { document: null, problems }
}

/** Both at once: the form as a design document, or what is wrong at which field. */
export function readForm(doc: FormDoc, arithmetic: Arithmetic): Checked & { isPending: boolean } {
  const { draft, problems, isPending } = readFields(doc, arithmetic)
  return draft === null
    ? { document: null, problems, isPending }
    : { ...checkDraft(doc, draft), isPending: false }
}

function readDocument(reader: Reader, doc: FormDoc): object {
  const { values } = doc
  const text = (name: string) => values[name] ?? ''
  const title = text('title').trim()
  if (title === '') wrong(reader, 'title', 'Title is missing.')
  const read = <T>(name: string, by: (own: Reader, text: string) => T) =>
    remembered(reader, name, [text(name)], (own) => by(own, text(name)))
  const bits = read('bits', readBits)
  const gain = readLines(reader, doc, 'gain')
  const offset = readLines(reader, doc, 'offset')
  const hasBudget = text('hasBudget') === 'yes' || gain.length + offset.length > 0
  const adjuster = (which: Which) =>
    remembered(reader, which, textsUnder(values, `${which}.`), (own) => readAdjuster(own, doc, which))
  return stated({
    format: 'ogee.design/1',
    title,
    converter: stated({ bits, coding: text('coding') || 'straight-binary', inlLsb: read('inl', readInl) }),
    channels: names(text('channels') || '1'),
    ranges: doc.ranges.map((range) =>
      remembered(
        reader,
        `range.${range.id}`,
        [...Object.values(range), ...textsUnder(values, `range.${range.id}.`)],
        (own) => readRange(own, doc, range),
      ),
    ),
    adjusters: stated({ gain: adjuster('gain'), offset: adjuster('offset') }),
    budget: hasBudget ? { gain, offset } : undefined,
    sizing: readSizing(reader, text),
    target: { residual: read('target', readTarget) },
    measurement: remembered(reader, 'measurement', [bits, ...planned.map(text)], (own) =>
      readMeasurement(own, text, bits),
    ),
    decision: remembered(reader, 'decision', [text('rule'), text('tolerance')], (own) =>
      readDecision(own, text),
    ),
  })
}

const readBits = (reader: Reader, text: string) =>
  readWhole(reader, 'bits', text, { label: 'Resolution', unit: 'bits' }, [
    limits.converterBitsMin,
    limits.converterBitsMax,
  ])
const readInl = (reader: Reader, text: string) =>
  readNumber(reader, 'inl', text, {
    label: 'INL limit',
    unit: 'LSB',
    optional: true,
    rule: 'not-negative',
  })
const readTarget = (reader: Reader, text: string) => readLimit(reader, 'target', text, 'Residual target')

type Text = (name: string) => string
const names = (text: string) =>
  text
    .split(',')
    .map((name) => name.trim())
    .filter((name) => name !== '')

function readRange(reader: Reader, doc: FormDoc, range: RangeTexts): object {
  const place = rangeField(range.id, 'ends')
  const ends = readEnds(reader, place, range.ends, { label: 'Range', unit: 'V' })
  if (ends?.low !== undefined && ends.high !== undefined && !(ends.low < ends.high)) {
    wrong(reader, place, `The range is reversed: its second end must be above the first.`)
  }
  const shared = names(range.sharedWith)
  return stated({
    id: range.name.trim(),
    label: range.label.trim() === '' ? undefined : range.label.trim(),
    lowV: ends?.low,
    highV: ends?.high,
    offsetAt: range.offsetAt || 'zero-volts',
    effects: readEffects(reader, doc, range.id),
    sharedWith: shared.length === 0 ? undefined : shared,
  })
}

/** What the adjusters do in this range alone, in the place of their own. */
function readEffects(reader: Reader, { values }: FormDoc, id: number): object | undefined {
  const effects = stated(
    Object.fromEntries(both.map((which) => [which, readEffect(reader, values, rangeEffect(id, which))])),
  )
  return Object.keys(effects).length === 0 ? undefined : effects
}

/** Nothing stated at all is no `sizing`: the defaults are the solver's. */
function readSizing(reader: Reader, text: Text): object | undefined {
  const [combine, margin, span] = [text('combine'), text('margin').trim(), text('temperatureSpan').trim()]
  if (combine === '' && margin === '' && span === '') return undefined
  const asked = { label: 'Temperature span', unit: 'K', optional: true, rule: 'not-negative' } as const
  return stated({
    combine: combine === '' ? undefined : combine,
    margin:
      margin === '' ? undefined : readFraction(reader, 'margin', margin, { label: 'Margin', unit: '%' }),
    temperatureSpanK: readNumber(reader, 'temperatureSpan', span, asked),
  })
}

function readLimit(reader: Reader, field: string, text: string, label: string): object | undefined {
  return readQuantity(reader, field, text, { label, unit: 'LSB', also: ['ppm', 'V'], rule: 'positive' })
}

/** The fields of `readMeasurement`. */
const planned = [
  'method',
  'points',
  'readings',
  'noise',
  'meterResolution',
  'plausible',
  'settle',
  'instrument',
] as const

function readMeasurement(reader: Reader, text: Text, bits: number | undefined): object {
  const number = (name: string, label: string, unit: string) =>
    readNumber(reader, name, text(name), { label, unit, optional: true, rule: 'positive' })
  const readings = text('readings').trim()
  const asked = { label: 'Readings', unit: '' }
  const meter = readMixed(reader, 'instrument', text('instrument'), 'Instrument', ['ppm', 'V'])
  return stated({
    method: text('method') || 'best-fit',
    points: readCodes(reader, text('points'), bits),
    readings:
      readings === '' ? undefined : readWhole(reader, 'readings', readings, asked, [1, limits.readingsMax]),
    noiseV: number('noise', 'Noise', 'V'),
    resolutionV: number('meterResolution', 'Meter step', 'V'),
    plausiblePercent: number('plausible', 'Refuse beyond', '%'),
    settleLimitLsb: number('settle', 'Settled within', 'LSB'),
    instrument:
      meter.size === 0 ? undefined : { gainPpm: meter.get('ppm') ?? 0, offsetV: meter.get('V') ?? 0 },
  })
}

/** "5 even", or codes after commas, decimal or hex. */
function readCodes(reader: Reader, text: string, bits: number | undefined): number[] | undefined {
  const even = /^\s*(\d{1,4})\s+even\s*$/.exec(text)
  if (even) {
    const count = Number(even[1])
    if (count < 2 || count > limits.planPointsMax) {
      return wrong(reader, 'points', 'Two different codes are the least that gives a line.')
    }
    return bits === undefined ? undefined : evenCodes(count, bits)
  }
  try {
    const codes = names(text).map((one) => parseCode(one, 'Codes'))
    if (codes.length >= 2) return codes
    return wrong(reader, 'points', 'Two different codes are the least that gives a line.')
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return wrong(reader, 'points', `${error.message} Or how many evenly: 5 even.`)
  }
}

function readDecision(reader: Reader, text: Text): object | undefined {
  const rule = text('rule')
  if (rule === '') return undefined
  return { rule, tolerance: readLimit(reader, 'tolerance', text('tolerance'), 'Tolerance') }
}
