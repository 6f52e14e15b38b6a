import type { Json } from '../../shared/ledger/canonical.ts'

/** The two designs of the demo scenario: an invented maker of bias supplies for cryogenic detector arrays. */

const channels = ['1', '2', '3', '4']
const sizing = { combine: 'worst-case', margin: 0.25, temperatureSpanK: 20 }
const target = { residual: { value: 0.5, unit: 'LSB' } }
const decision = { rule: 'guarded', tolerance: { value: 1, unit: 'LSB' } }
const drift = { name: 'Reference drift', limitPpm: 20, distribution: 'rectangular', when: 'drift' }
const gainBudget = [
  { name: 'Converter gain error', limitPpm: 120, distribution: 'rectangular', when: 'initial' },
  { name: 'Reference initial accuracy', limitPpm: 250, distribution: 'rectangular', when: 'initial' },
  drift,
]
const directOffset = {
  effect: { kind: 'output-summing', feedbackOhm: 10000, adjustOhm: 1000000, inverting: true },
  effectTolerance: 0.2,
  node: { nominalV: 0, minV: -5, maxV: 5 },
  network: { kind: 'direct' },
}

const biasSource: Json = {
  format: 'ogee.design/1',
  title: 'Detector bias source, output A',
  converter: { bits: 18, coding: 'straight-binary', inlLsb: 1 },
  channels,
  ranges: [{ id: 'u10', label: '0 V to 10 V', lowV: 0, highV: 10, offsetAt: 'zero-volts' }],
  adjusters: {
    gain: {
      effect: { kind: 'measured', slopePerV: 0.00208, offsetPerV: 0 },
      effectTolerance: 0.2,
      node: { nominalV: 0, minV: -5, maxV: 5, inputOhm: 250000 },
      source: { bits: 12, coding: 'offset-binary', lowV: -2.5, highV: 2.5, inlLsb: 1, driftPpmPerK: 5 },
      network: { kind: 'divider', topOhm: 8660, bottomOhm: 1500 },
    },
    offset: { ...directOffset, source: { bits: 12, coding: 'offset-binary', lowV: -2.5, highV: 2.5 } },
  },
  budget: {
    gain: gainBudget,
    offset: [{ name: 'Amplifier offset', limitV: 0.00003, distribution: 'normal', k: 2, when: 'initial' }],
  },
  sizing,
  target,
  measurement: {
    method: 'best-fit',
    points: [0, 65536, 131072, 196608, 262143],
    readings: 4,
    noiseV: 0.0000015,
    plausiblePercent: 5,
    settleLimitLsb: 0.25,
    instrument: { gainPpm: 0.5, offsetV: 0.000001 },
  },
  decision,
}

const compensationSource: Json = {
  format: 'ogee.design/1',
  title: 'Detector compensation source, output C',
  converter: { bits: 16, coding: 'twos-complement', inlLsb: 1 },
  channels,
  ranges: [{ id: 'b10', label: '-10 V to 10 V', lowV: -10, highV: 10, offsetAt: 'zero-volts' }],
  adjusters: {
    gain: {
      effect: {
        kind: 'reference-summing',
        inputOhm: 10000,
        adjustOhm: 820000,
        referenceV: 5,
        inverting: true,
        pivotV: 0,
      },
      effectTolerance: 0.15,
      node: { nominalV: 0, minV: -5, maxV: 5, inputOhm: 820000 },
      source: {
        bits: 10,
        coding: 'straight-binary',
        lowV: 0,
        highV: 2.5,
        inlLsb: 0.5,
        driftPpmPerK: 10,
      },
      network: { kind: 'shifted', topOhm: 10000, shiftOhm: 40200, shiftV: -5, bottomOhm: 20000 },
    },
    offset: { ...directOffset, source: { bits: 12, coding: 'twos-complement', lowV: -2.5, highV: 2.5 } },
  },
  budget: {
    gain: gainBudget,
    offset: [{ name: 'Amplifier offset', limitV: 0.001, distribution: 'normal', k: 2, when: 'initial' }],
  },
  sizing,
  target,
  measurement: {
    method: 'best-fit',
    points: [0, 8192, 16384, 32768, 49152, 65535],
    readings: 4,
    noiseV: 0.00002,
    plausiblePercent: 5,
    settleLimitLsb: 0.25,
    instrument: { gainPpm: 2, offsetV: 0.000005 },
  },
  decision,
}

export const demoDesigns = [
  { key: 'DBS-A', document: biasSource },
  { key: 'DBC-16', document: compensationSource },
] as const
