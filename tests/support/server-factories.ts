import type { Json } from '../../shared/ledger/canonical.ts'

/** The unipolar example with two ranges' worth of nothing extra: one channel, one range. */
export function unipolar(change: { [key: string]: Json } = {}): Json {
  return {
    format: 'ogee.design/1',
    title: 'Detector bias source, output A',
    converter: { bits: 18, coding: 'straight-binary', inlLsb: 1 },
    ranges: [{ id: 'u10', label: '0 V to 10 V', lowV: 0, highV: 10, offsetAt: 'zero-volts' }],
    adjusters: {
      gain: {
        effect: { kind: 'measured', slopePerV: 0.00208, offsetPerV: 0 },
        effectTolerance: 0.2,
        node: { nominalV: 0, minV: -5, maxV: 5, inputOhm: 250000 },
        source: { bits: 12, coding: 'offset-binary', lowV: -2.5, highV: 2.5, inlLsb: 1, driftPpmPerK: 5 },
        network: { kind: 'divider', topOhm: 8660, bottomOhm: 1500 },
      },
      offset: {
        effect: { kind: 'output-summing', feedbackOhm: 10000, adjustOhm: 1000000, inverting: true },
        effectTolerance: 0.2,
        node: { nominalV: 0, minV: -5, maxV: 5 },
        source: { bits: 12, coding: 'offset-binary', lowV: -2.5, highV: 2.5 },
        network: { kind: 'direct' },
      },
    },
    target: { residual: { value: 0.5, unit: 'LSB' } },
    measurement: { method: 'best-fit', points: [0, 65536, 131072, 196608, 262143], plausiblePercent: 5 },
    decision: { rule: 'simple', tolerance: { value: 1, unit: 'LSB' } },
    ...change,
  }
}

const lsb = 10 / 2 ** 18

/** Points of a channel with that gain error and offset: a straight line, so that the fit is exact and clean. */
export function pointsOf({ gainPpm = 0, offsetV = 0 } = {}) {
  return [0, 65536, 131072, 196608, 262143].map((code) => ({
    code,
    measured: code * lsb * (1 + gainPpm * 1e-6) + offsetV,
    uncertainty: 5e-6,
  }))
}

/** Far outside what noise explains at one code: a suspect fit. */
export function suspectPoints() {
  return pointsOf({ gainPpm: -200 }).map((point) =>
    point.code === 131072 ? { ...point, measured: point.measured + 40 * lsb } : point,
  )
}

export function trimBody(change: { [key: string]: unknown } = {}) {
  return { design: 'U18', unit: 'S-1', points: pointsOf({ gainPpm: -203, offsetV: 2e-6 }), ...change }
}
