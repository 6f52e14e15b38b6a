import { limits } from '../../../shared/limits.ts'
import type { FormDoc, Which } from './form-doc.ts'
import {
  type Asked,
  type Reader,
  readEnds,
  readFraction,
  readMixed,
  readNumber,
  readSeries,
  readWhole,
  stated,
  wrong,
} from './reader.ts'

/** One adjuster of the form as the document has it; undefined when the design has none. */
export function readAdjuster(reader: Reader, { values }: FormDoc, which: Which): object | undefined {
  const effect = readEffect(reader, values, which)
  if (effect === undefined) return undefined
  const text = (name: string) => values[`${which}.${name}`] ?? ''
  const number = (name: string, asked: Asked) => readNumber(reader, `${which}.${name}`, text(name), asked)
  return stated({
    effect,
    effectTolerance: knownTo(reader, which, text('known')),
    node: readNode(reader, which, text, number),
    source: readSource(reader, which, text),
    network: readNetwork(reader, which, text, number),
  })
}

type Text = (name: string) => string
type Number_ = (name: string, asked: Asked) => number | undefined
const ohm = (label: string): Asked => ({ label, unit: 'ohm', rule: 'positive' })
const volt = (label: string): Asked => ({ label, unit: 'V' })

/**
 * What an adjuster does at the output; undefined where none is chosen.
 * @param under the adjuster, or the adjuster in one range: `gain`, `range.1.gain`
 */
export function readEffect(reader: Reader, values: FormDoc['values'], under: string): object | undefined {
  const kind = values[`${under}.effect`] || 'none'
  if (kind === 'none') return undefined
  const text = (name: string) => values[`${under}.${name}`] ?? ''
  const number = (name: string, asked: Asked) => readNumber(reader, `${under}.${name}`, text(name), asked)
  if (kind === 'measured') {
    const slopePerV = number('slope', { label: 'Slope', unit: '/V', optional: true })
    const offsetPerV = number('offsetPerV', { label: 'Offset per V', unit: 'V/V', optional: true })
    return stated({ kind, slopePerV, offsetPerV })
  }
  const adjustOhm = number('adjust', ohm('R adjust'))
  const inverting = text('sign') !== 'not-inverting'
  if (kind === 'output-summing') {
    return { kind, feedbackOhm: number('feedback', ohm('R feedback')), adjustOhm, inverting }
  }
  return {
    kind,
    inputOhm: number('inputR', ohm('R input')),
    adjustOhm,
    referenceV: number('reference', volt('Reference')),
    inverting,
    pivotV: number('pivot', { ...volt('Pivot'), optional: true }) ?? 0,
  }
}

function knownTo(reader: Reader, which: Which, text: string): number {
  if (text.trim() === '') return 0
  return readFraction(reader, `${which}.known`, text, { label: 'Known to', unit: '%', rule: 'fraction' }) ?? 0
}

function readNode(reader: Reader, which: Which, text: Text, number: Number_): object {
  const asked = { ...volt('Node limits'), optional: true, open: true }
  const ends = readEnds(reader, `${which}.limits`, text('limits'), asked)
  if (ends?.low !== undefined && ends.high !== undefined && !(ends.low < ends.high)) {
    wrong(reader, `${which}.limits`, 'Node limits are reversed: the second must be above the first.')
  }
  return stated({
    nominalV: number('nominal', { ...volt('Node nominal'), optional: true }) ?? 0,
    minV: ends?.low,
    maxV: ends?.high,
    inputOhm: number('nodeInput', { ...ohm('Node input'), optional: true }),
    returnV: number('return', { ...volt('Node return'), optional: true }) ?? 0,
  })
}

function readSource(reader: Reader, which: Which, text: Text): object {
  const place = (name: string) => `${which}.${name}`
  const bits = { label: 'Auxiliary DAC', unit: 'bits' }
  const ends = readEnds(reader, place('span'), text('span'), volt('Span'))
  if (ends !== undefined && ends.low !== undefined && ends.low === ends.high) {
    wrong(reader, place('span'), 'The auxiliary DAC spans nothing: its two ends are the same voltage.')
  }
  const errors = readMixed(reader, place('inlDrift'), text('inlDrift'), 'INL, drift', ['LSB', 'ppm/K'])
  const spanTolerance = text('spanTolerance')
  return stated({
    bits: readWhole(reader, place('bits'), text('bits'), bits, [limits.sourceBitsMin, limits.sourceBitsMax]),
    coding: text('coding') || 'straight-binary',
    lowV: ends?.low,
    highV: ends?.high,
    inlLsb: errors.get('LSB'),
    driftPpmPerK: errors.get('ppm/K'),
    spanTolerance:
      spanTolerance.trim() === ''
        ? undefined
        : readFraction(reader, place('spanTolerance'), spanTolerance, {
            label: 'Span tolerance',
            unit: '%',
            rule: 'fraction',
          }),
  })
}

function readNetwork(reader: Reader, which: Which, text: Text, number: Number_): object {
  const kind = text('network') || 'direct'
  if (kind === 'direct') return { kind }
  if (kind === 'divider') {
    const asked = ohm('R top, R bottom')
    const [topOhm, bottomOhm] = readSeries(reader, `${which}.rs`, text('rs'), asked, [2, 2]) ?? []
    return { kind, topOhm, bottomOhm }
  }
  const asked = ohm('R top, shift, bottom')
  const series = readSeries(reader, `${which}.rs3`, text('rs3'), asked, [2, 3])
  const [topOhm, shiftOhm, bottomOhm] = series ?? []
  const shiftV = number('shift', volt('Shift to'))
  return stated({ kind, topOhm, shiftOhm, shiftV, bottomOhm })
}
