import type { CodesDocument } from '../../shared/contract/codes.ts'
import type { VerifyDocument } from '../../shared/contract/verify.ts'

/** Results of the solver as the server stores them, rounded for reading: only their form is exact. */

export const measured: readonly [number, number, number, number][] = [
  [0, 0, 0.0000013, -0.02],
  [65536, 2.5, 2.4994998, 0.17],
  [131072, 5, 4.9989783, -0.17],
  [196608, 7.5, 7.4984718, -0.11],
  [262143, 9.999961853, 9.9979342, 0.13],
]
const lsbV = 10 / 2 ** 18

const fit: CodesDocument['fit'] = {
  method: 'best-fit',
  n: 5,
  dof: 3,
  dofWhy: null,
  offsetErrorV: 0.00000189,
  gainErrorPpm: -203.44,
  fullScaleErrorV: -0.0020325,
  standardUncertainty: { offsetV: 5e-6, gainPpm: 0.82, covarianceVPpm: -1e-6 },
  expandedUncertainty: { offsetV: 0.0000159, gainPpm: 2.76, kOffset: 3.18, kGain: 3.18 },
  residuals: measured.map(([code, idealV, measuredV, residualLsb]) => ({
    code,
    idealV,
    measuredV,
    errorV: measuredV - idealV,
    residualV: residualLsb * lsbV,
    residualLsb,
  })),
  linearity: { maxV: 0.17 * lsbV, maxLsb: 0.17, maxPpm: 0.65, atCode: 65536 },
  chiSquared: null,
  instrument: { id: null, gainPpm: 3, offsetV: 0.000002 },
  flags: [],
  notes: [],
}

export const codesResult: CodesDocument = {
  format: 'ogee.codes/1',
  solver: '1.0.0',
  range: 'u10',
  fit,
  trim: {
    verdict: 'ok',
    reasons: [],
    codes: { gain: 2593, offset: 2048 },
    words: { gain: '0xA21', offset: '0x800' },
    nodeV: { gain: 0.0978, offset: 0 },
    exactNodeV: { gain: 0.0978, offset: 0.000189 },
    appliedNodeV: { gain: 0, offset: 0 },
    effects: {
      gain: { slopePerV: 0.00208, offsetPerV: 0, tolerance: 0.2, source: 'design', factor: 1, why: null },
      offset: { slopePerV: 0, offsetPerV: -0.01, tolerance: 0.2, source: 'design', factor: 1, why: null },
    },
    reachUsed: { gain: 0.263, offset: 0 },
    shortfall: null,
    predicted: {
      offsetErrorV: 0.00000189,
      gainErrorPpm: -0.18,
      worstV: 0.0000019,
      worstLsb: 0.05,
      worstPpm: 0.19,
      atV: 0,
      expandedUncertaintyV: 0.000016,
      effectV: 0.0004,
    },
    notes: [],
  },
}

export const suspectResult: CodesDocument = {
  ...codesResult,
  fit: {
    ...fit,
    flags: [{ flag: 'unsettled', code: 196608, value: 6.4, limit: 0.25, unit: 'LSB' }],
  },
  trim: {
    ...codesResult.trim,
    verdict: 'suspect',
    reasons: ['suspect'],
  },
}

export const outOfReachResult: CodesDocument = {
  ...codesResult,
  trim: {
    ...codesResult.trim,
    verdict: 'out-of-reach',
    reasons: ['out-of-reach'],
    codes: null,
    words: null,
    nodeV: null,
    exactNodeV: { gain: 0.41, offset: 0.000189 },
    reachUsed: { gain: 1.11, offset: 0 },
    shortfall: {
      gain: { wantedV: 0.41, limitV: 0.369, by: 'codes', nearestCode: 4095 },
      remainingWorstV: 0.0008,
    },
    predicted: null,
  },
}

export const verifyResult: VerifyDocument = {
  format: 'ogee.verify/1',
  solver: '1.0.0',
  range: 'u10',
  rule: 'guarded',
  toleranceV: lsbV,
  tur: 4.1,
  outcome: 'conditional-pass',
  points: measured.map(([code, idealV, , residualLsb]) => ({
    code,
    idealV,
    measuredV: idealV + residualLsb * lsbV,
    errorV: residualLsb * lsbV,
    errorLsb: residualLsb,
    expandedUncertaintyV: 0.0000031,
    outcome: code === 262143 ? 'conditional-pass' : 'pass',
    conformanceProbability: 0.998,
  })),
  worst: { code: 262143, errorV: 0.76 * lsbV, errorLsb: 0.76 },
  fit: null,
  notes: [],
}
