import {
  both,
  type FormDoc,
  type LineField,
  lineField,
  rangeEffect,
  rangeField,
  type Which,
} from './form-doc.ts'
import { shapes } from './words.ts'

/** The field of the form that a JSON pointer into the document speaks of. What has no field of its own stands at its part. */
export function fieldAt(doc: FormDoc, pointer: string): string {
  const [, head = '', second = '', third = '', fourth = '', fifth = ''] = pointer.split('/')
  if (head === 'budget') return budgetField(doc, second, third, fourth)
  if (head === 'ranges') {
    const range = doc.ranges[Number(second)]
    if (!range) return 'ranges'
    const effect = both.find((one) => third === 'effects' && one === fourth)
    if (effect) return `${rangeEffect(range.id, effect)}.${effectNames[fifth] ?? 'effect'}`
    return rangeField(range.id, rangeNames[third] ?? 'ends')
  }
  if (head === 'adjusters') {
    const which = both.find((one) => one === second)
    if (which === undefined) return 'adjusters'
    return `${which}.${adjusterField(doc, which, third, fourth)}`
  }
  return names[`${head}/${second}`] ?? names[head] ?? head
}

const names: Readonly<Record<string, string>> = {
  'converter/bits': 'bits',
  'converter/coding': 'coding',
  'converter/inlLsb': 'inl',
  'sizing/combine': 'combine',
  'sizing/margin': 'margin',
  'sizing/temperatureSpanK': 'temperatureSpan',
  target: 'target',
  'measurement/method': 'method',
  'measurement/points': 'points',
  'measurement/readings': 'readings',
  'measurement/noiseV': 'noise',
  'measurement/resolutionV': 'meterResolution',
  'measurement/plausiblePercent': 'plausible',
  'measurement/settleLimitLsb': 'settle',
  'measurement/instrument': 'instrument',
  'decision/rule': 'rule',
  'decision/tolerance': 'tolerance',
}
const rangeNames = {
  id: 'name',
  label: 'label',
  offsetAt: 'offsetAt',
  sharedWith: 'sharedWith',
} as Readonly<Record<string, 'name' | 'label' | 'offsetAt' | 'sharedWith'>>
const lineNames: Readonly<Record<string, LineField>> = {
  name: 'name',
  limitPpm: 'limit',
  limitV: 'limit',
  nominalPpm: 'nominal',
  nominalV: 'nominal',
  pivotV: 'pivot',
  k: 'shape',
  distribution: 'shape',
  when: 'when',
}
const effectNames: Readonly<Record<string, string>> = {
  slopePerV: 'slope',
  offsetPerV: 'offsetPerV',
  feedbackOhm: 'feedback',
  adjustOhm: 'adjust',
  inputOhm: 'inputR',
  referenceV: 'reference',
  pivotV: 'pivot',
}
const nodeNames: Readonly<Record<string, string>> = {
  nominalV: 'nominal',
  minV: 'limits',
  maxV: 'limits',
  inputOhm: 'nodeInput',
  returnV: 'return',
}
const sourceNames: Readonly<Record<string, string>> = {
  bits: 'bits',
  coding: 'coding',
  lowV: 'span',
  highV: 'span',
  inlLsb: 'inlDrift',
  driftPpmPerK: 'inlDrift',
  spanTolerance: 'spanTolerance',
}

function budgetField(doc: FormDoc, second: string, third: string, fourth: string): string {
  if (second !== 'gain' && second !== 'offset') return 'budget'
  const line = doc.lines[second][Number(third)]
  if (third === '' || line === undefined) return `budget.${second}`
  // An offered k stands in the shape; another has a field of its own.
  if (fourth === 'k' && !shapes.some(([shape]) => shape === line.shape))
    return lineField(second, line.id, 'k')
  return lineField(second, line.id, lineNames[fourth] ?? 'name')
}

function adjusterField(doc: FormDoc, which: Which, third: string, fourth: string): string {
  if (third === 'effectTolerance') return 'known'
  if (third === 'node') return nodeNames[fourth] ?? 'nominal'
  if (third === 'source') return sourceNames[fourth] ?? 'bits'
  if (third === 'effect') return effectNames[fourth] ?? 'effect'
  if (third !== 'network') return 'effect'
  if (fourth === 'shiftV') return 'shift'
  const kind = doc.values[`${which}.network`]
  return kind === 'divider' ? 'rs' : kind === 'shifted' ? 'rs3' : 'network'
}
