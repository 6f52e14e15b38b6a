import { copyText } from '../quantity/format.ts'

/** Names and units of the fields of a design, as a reviewer reads them. */

const names: Readonly<Record<string, string>> = {
  title: 'title',
  format: 'format',
  converter: 'converter',
  bits: 'bits',
  coding: 'coding',
  inlLsb: 'INL',
  channels: 'channels',
  ranges: 'range',
  id: 'id',
  label: 'label',
  lowV: 'low end',
  highV: 'high end',
  offsetAt: 'offset point',
  effects: 'own effect',
  sharedWith: 'shares its codes with',
  adjusters: 'adjuster',
  gain: 'gain',
  offset: 'offset',
  effect: 'effect',
  kind: 'kind',
  slopePerV: 'slope per volt',
  offsetPerV: 'offset per volt',
  inputOhm: 'input resistor',
  adjustOhm: 'adjust resistor',
  feedbackOhm: 'feedback resistor',
  referenceV: 'reference',
  inverting: 'inverting',
  pivotV: 'pivot',
  effectTolerance: 'effect known to',
  node: 'node',
  nominalV: 'nominal',
  minV: 'lowest',
  maxV: 'highest',
  returnV: 'return',
  source: 'auxiliary DAC',
  driftPpmPerK: 'drift',
  spanTolerance: 'span tolerance',
  network: 'network',
  topOhm: 'top resistor',
  bottomOhm: 'bottom resistor',
  shiftOhm: 'shift resistor',
  shiftV: 'shift voltage',
  budget: 'budget',
  name: 'name',
  limitPpm: 'limit',
  limitV: 'limit',
  nominalPpm: 'nominal',
  distribution: 'distribution',
  k: 'k',
  when: 'when',
  sizing: 'sizing',
  combine: 'combined by',
  margin: 'margin',
  temperatureSpanK: 'temperature span',
  target: 'target',
  residual: 'residual',
  measurement: 'measurement',
  method: 'method',
  points: 'codes',
  readings: 'readings',
  noiseV: 'noise',
  resolutionV: 'resolution',
  plausiblePercent: 'plausible within',
  settleLimitLsb: 'settling limit',
  instrument: 'instrument',
  gainPpm: 'gain',
  offsetV: 'offset',
  decision: 'decision',
  rule: 'rule',
  tolerance: 'tolerance',
}

const units: readonly (readonly [RegExp, string])[] = [
  [/PpmPerK$/, 'ppm/K'],
  [/PerV$/, '1/V'],
  [/Percent$/, '%'],
  [/Ohm$/, 'Ω'],
  [/Ppm$/, 'ppm'],
  [/Lsb$/, 'LSB'],
  [/SpanK$/, 'K'],
  [/V$/, 'V'],
]
/** Words of a fixed list, written with dashes; what people typed themselves keeps its own. */
const wordLists = new Set(['coding', 'offsetAt', 'kind', 'distribution', 'combine', 'method', 'rule', 'when'])
/** Ratios that people read as percent. */
const ratios = new Set(['effectTolerance', 'spanTolerance', 'margin'])

export const fieldName = (key: string): string => names[key] ?? key

/** True for every field that has words of its own: a test holds it against the schema. */
export const isNamed = (key: string): boolean => Object.hasOwn(names, key)

/** A value with its unit and every digit, so that two that differ never read the same. */
export function valueText(key: string, value: unknown): string {
  if (typeof value === 'boolean') return value ? 'yes' : 'no'
  if (Array.isArray(value)) return value.length === 0 ? 'none' : value.map(String).join(', ')
  if (isLimit(value)) return withUnit(value.value, value.unit)
  if (typeof value !== 'number')
    return wordLists.has(key) ? String(value).replaceAll('-', ' ') : String(value)
  if (ratios.has(key)) return withUnit(percentOf(value), '%')
  return withUnit(value, units.find(([ending]) => ending.test(key))?.[1] ?? '')
}

/** A limit with its unit: one value to a reader. */
export function isLimit(value: unknown): value is { value: number; unit: string } {
  return typeof value === 'object' && value !== null && 'value' in value && 'unit' in value
}

/** 0.07 is 7 %, not 7.000000000000001 %: the point is moved in the decimal text. */
function percentOf(ratio: number): number {
  const [mantissa, exponent] = ratio.toExponential().split('e')
  return Number(`${mantissa}e${Number(exponent) + 2}`)
}

export function withUnit(value: number, unit: string): string {
  return copyText(value, unit).replace(/^-/, '\u2212').replace(' u', ' µ').replace(/ohm$/, 'Ω')
}
