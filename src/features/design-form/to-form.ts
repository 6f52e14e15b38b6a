import type { Design } from '../../../shared/contract/design.ts'
import { evenCodes } from './even-codes.ts'
import { endsText, limitText, ohmShort, ohmText, percentText, perVoltText, voltText } from './exact-text.ts'
import { both, type FormDoc, type Line, type RangeTexts, rangeEffect, type Which } from './form-doc.ts'
import { newLine } from './form-state.ts'

type Adjuster = NonNullable<Design['adjusters']['gain']>
type Texts = Record<string, string>

/** What of a value there may not be. */
const stated = <T>(value: T | undefined, text: (value: T) => string): string =>
  value === undefined ? '' : text(value)

/** A design document as texts, each of which reads back to the same double. */
export function toForm(design: Design): FormDoc {
  let id = 1
  const ranges = design.ranges.map(
    (range): RangeTexts => ({
      id: id++,
      name: range.id,
      label: range.label ?? '',
      ends: endsText(range.lowV, range.highV),
      offsetAt: range.offsetAt,
      sharedWith: (range.sharedWith ?? []).join(', '),
    }),
  )
  const gain = (design.budget?.gain ?? []).map(
    (line): Line => ({
      ...lineTexts(id++, line),
      limit: `${line.limitPpm} ppm`,
      nominal: stated(line.nominalPpm, (v) => `${v} ppm`),
      pivot: stated(line.pivotV, voltText),
    }),
  )
  const offset = (design.budget?.offset ?? []).map(
    (line): Line => ({
      ...lineTexts(id++, line),
      limit: voltText(line.limitV),
      nominal: stated(line.nominalV, voltText),
    }),
  )
  const values: Texts = {
    title: design.title,
    bits: `${design.converter.bits} bits`,
    coding: design.converter.coding,
    inl: stated(design.converter.inlLsb, (v) => `${v} LSB`),
    channels: design.channels.join(', '),
    hasBudget: design.budget === undefined ? '' : 'yes',
    ...planTexts(design),
  }
  for (const which of both) {
    Object.assign(values, adjusterTexts(which, design.adjusters[which]))
    design.ranges.forEach(({ effects }, i) => {
      const effect = effects?.[which]
      const under = rangeEffect(ranges[i]!.id, which)
      if (effect) Object.assign(values, textsAt(under, { effect: effect.kind, ...effectTexts(effect) }))
    })
  }
  return { values, lines: { gain, offset }, ranges, nextId: id }
}

function lineTexts(
  id: number,
  line: { name: string; distribution: string; k?: number | undefined; when: string },
): Line {
  const shape = line.k === undefined ? line.distribution : `${line.distribution} ${line.k}`
  return { ...newLine(id), name: line.name, shape, when: line.when }
}

function planTexts({ sizing, target, measurement, decision, converter: { bits } }: Design): Texts {
  const { instrument } = measurement
  return {
    combine: sizing?.combine ?? '',
    margin: stated(sizing?.margin, percentText),
    temperatureSpan: stated(sizing?.temperatureSpanK, (v) => `${v} K`),
    target: limitText(target.residual),
    method: measurement.method,
    points: codesText(measurement.points, bits),
    readings: stated(measurement.readings, String),
    noise: stated(measurement.noiseV, voltText),
    meterResolution: stated(measurement.resolutionV, voltText),
    plausible: `${measurement.plausiblePercent} %`,
    settle: `${measurement.settleLimitLsb} LSB`,
    instrument: stated(instrument, (v) => `${v.gainPpm} ppm, ${voltText(v.offsetV)}`),
    rule: decision?.rule ?? '',
    tolerance: stated(decision?.tolerance, limitText),
  }
}

function adjusterTexts(which: Which, adjuster: Adjuster | undefined): Texts {
  if (adjuster === undefined) return { [`${which}.effect`]: 'none' }
  const { node, source, effect } = adjuster
  const named: Texts = {
    effect: effect.kind,
    ...effectTexts(effect),
    known: percentText(adjuster.effectTolerance),
    nominal: voltText(node.nominalV),
    limits: limitsText(node.minV, node.maxV),
    nodeInput: stated(node.inputOhm, ohmText),
    return: voltText(node.returnV),
    ...networkTexts(adjuster.network),
    bits: `${source.bits} bits`,
    coding: source.coding,
    span: endsText(source.lowV, source.highV),
    spanTolerance: stated(source.spanTolerance, percentText),
    inlDrift: [stated(source.inlLsb, (v) => `${v} LSB`), stated(source.driftPpmPerK, (v) => `${v} ppm/K`)]
      .filter(Boolean)
      .join(', '),
  }
  return textsAt(which, named)
}

const textsAt = (under: string, texts: Texts): Texts =>
  Object.fromEntries(Object.entries(texts).map(([name, text]) => [`${under}.${name}`, text]))

function effectTexts(effect: Adjuster['effect']): Texts {
  if (effect.kind === 'measured') {
    return {
      slope: perVoltText(effect.slopePerV, '/V'),
      offsetPerV: perVoltText(effect.offsetPerV, 'V/V'),
    }
  }
  const sign = effect.inverting ? 'inverting' : 'not-inverting'
  if (effect.kind === 'output-summing') {
    return { feedback: ohmText(effect.feedbackOhm), adjust: ohmText(effect.adjustOhm), sign }
  }
  return {
    inputR: ohmText(effect.inputOhm),
    adjust: ohmText(effect.adjustOhm),
    reference: voltText(effect.referenceV),
    sign,
    pivot: voltText(effect.pivotV),
  }
}

function networkTexts(network: Adjuster['network']): Texts {
  if (network.kind === 'direct') return { network: 'direct' }
  if (network.kind === 'divider') {
    return { network: 'divider', rs: `${ohmShort(network.topOhm)} / ${ohmShort(network.bottomOhm)}` }
  }
  const rs = [network.topOhm, network.shiftOhm, network.bottomOhm]
  return {
    network: 'shifted',
    rs3: rs.flatMap((r) => (r === undefined ? [] : [ohmShort(r)])).join(' / '),
    shift: voltText(network.shiftV),
  }
}

function limitsText(minV: number | undefined, maxV: number | undefined): string {
  if (minV === undefined && maxV === undefined) return ''
  const end = (value: number | undefined) => stated(value, voltText) || 'none'
  return `${end(minV)} to ${end(maxV)}`
}

/** Codes as a list, or "5 even" where they are just that. */
function codesText(codes: readonly number[], bits: number): string {
  const even = evenCodes(codes.length, bits)
  return codes.every((code, i) => code === even[i]) ? `${codes.length} even` : codes.join(', ')
}
