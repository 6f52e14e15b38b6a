import type { Design } from '../../../shared/contract/design.ts'
import { exact, fixed } from '../../ui/number-format.ts'

/** Stored values of a design as text: every digit that is stored, in engineering notation. */

type Adjuster = NonNullable<Design['adjusters']['gain']>
type Effect = Adjuster['effect']
type Limit = Design['target']['residual']

export const codings: Record<Design['converter']['coding'], string> = {
  'straight-binary': 'straight binary',
  'offset-binary': 'offset binary',
  'twos-complement': "two's complement",
}

export function percent(fraction: number): string {
  return `${Number((fraction * 100).toPrecision(12))} %`
}

export function span(lowV: number, highV: number): string {
  return `${exact(lowV, 'V')} to ${exact(highV, 'V')}`
}

/** A number that is no ordinary size as engineers type it: 2.08e-3 /V. */
function perVolt(value: number, unit: string): string {
  if (value === 0) return `0 ${unit}`
  const exponent = Math.floor(Math.log10(Math.abs(value)) / 3) * 3
  const mantissa = Number((value / 10 ** exponent).toPrecision(12))
  return `${fixedAsStored(mantissa)}${exponent === 0 ? '' : `e${exponent}`} ${unit}`
}

function fixedAsStored(value: number): string {
  const decimals = (String(value).split('.')[1] ?? '').length
  return fixed(value, Math.min(decimals, 12))
}

export function effectKind(effect: Effect): string {
  if (effect.kind === 'measured') return 'measured'
  return effect.kind === 'reference-summing' ? 'reference summing' : 'output summing'
}

/** Name and value of each thing that an effect is made of, in the order of the signal path. */
export function effectFacts(effect: Effect): [string, string][] {
  if (effect.kind === 'measured') {
    return [
      ['slope', perVolt(effect.slopePerV, '/V')],
      ['offset per volt', perVolt(effect.offsetPerV, 'V/V')],
    ]
  }
  const sign: [string, string] = ['sign', effect.inverting ? 'inverting' : 'not inverting']
  if (effect.kind === 'output-summing') {
    return [['R feedback', exact(effect.feedbackOhm, 'Ω')], ['R adjust', exact(effect.adjustOhm, 'Ω')], sign]
  }
  return [
    ['R input', exact(effect.inputOhm, 'Ω')],
    ['R adjust', exact(effect.adjustOhm, 'Ω')],
    ['reference', exact(effect.referenceV, 'V')],
    sign,
    ['pivot', exact(effect.pivotV, 'V')],
  ]
}

export function networkFacts(network: Adjuster['network']): [string, string][] {
  if (network.kind === 'direct') return [['network', 'direct']]
  const divider: [string, string][] = [
    ['network', network.kind],
    ['R top', exact(network.topOhm, 'Ω')],
  ]
  if (network.kind === 'shifted') {
    divider.push(['R shift', exact(network.shiftOhm, 'Ω')], ['shift to', exact(network.shiftV, 'V')])
  }
  divider.push(['R bottom', network.bottomOhm === undefined ? 'none' : exact(network.bottomOhm, 'Ω')])
  return divider
}

export function nodeFacts(node: Adjuster['node']): [string, string][] {
  const low = node.minV === undefined ? 'not stated' : exact(node.minV, 'V')
  const high = node.maxV === undefined ? 'not stated' : exact(node.maxV, 'V')
  return [
    ['node nominal', exact(node.nominalV, 'V')],
    ['node limits', low === high ? low : `${low} to ${high}`],
    ['node input', node.inputOhm === undefined ? 'not stated' : exact(node.inputOhm, 'Ω')],
    ['node return', exact(node.returnV, 'V')],
  ]
}

export function sourceFacts(source: Adjuster['source']): [string, string][] {
  return [
    ['auxiliary DAC', `${source.bits} bits, ${codings[source.coding]}`],
    ['span', span(source.lowV, source.highV)],
    ['span tolerance', source.spanTolerance === undefined ? 'not stated' : percent(source.spanTolerance)],
    ['INL', source.inlLsb === undefined ? 'not stated' : `${source.inlLsb} LSB`],
    ['drift', source.driftPpmPerK === undefined ? 'not stated' : `${source.driftPpmPerK} ppm/K`],
  ]
}

export function limitText(limit: Limit): string {
  return limit.unit === 'V' ? exact(limit.value, 'V') : `${limit.value} ${limit.unit}`
}

/** A limit in volts of one range, to stand beside what the document says. */
export function limitInVolts(limit: Limit, range: Design['ranges'][number], bits: number): number {
  const span = range.highV - range.lowV
  if (limit.unit === 'V') return limit.value
  return limit.unit === 'ppm' ? limit.value * span * 1e-6 : (limit.value * span) / 2 ** bits
}
