import { describe, expect, test } from 'vitest'
import { studentUpper } from '../../../shared/solver/distribution/student.ts'
import { errorLine } from '../../../shared/solver/error-line.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { plainDesign, pointsOnLine } from '../../support/solver-fixtures.ts'

const codes = [0, 16384, 32768, 49152, 65535]
const design = plainDesign()
const LSB = 10 / 65536
const scatter = [0.02, -0.03, 0.01, 0.02, -0.02]

describe('uncertainty of the line', () => {
  test('readings are pooled: s_p² over all points, u_i = √(s_p²/m_i + q²/12), ν_r = Σ(m_i - 1)', () => {
    const measurement = { resolutionV: 6e-6 }
    const points = codes.map((code, i) => {
      const y = (code * 10) / 65536
      return { code, readings: i === 0 ? [y - 1e-5, y + 1e-5] : [y - 2e-5, y, y + 2e-5] }
    })
    const { fit } = fitPoints(plainDesign({ measurement }), points)
    const sp2 = (2 * 1e-10 + 4 * 8e-10) / 9
    const u = codes.map((_, i) => Math.sqrt(sp2 / (i === 0 ? 2 : 3) + 36e-12 / 12))
    const w = u.map((v) => 1 / v ** 2)
    const z = codes.map((code) => code * LSB)
    const W = w.reduce((a, b) => a + b)
    const mean = z.reduce((sum, v, i) => sum + w[i]! * v, 0) / W
    const S = z.reduce((sum, v, i) => sum + w[i]! * (v - mean) ** 2, 0)
    expect(fit.dof).toBe(9)
    expect(fit.dofWhy).toBe(null)
    expect(fit.standardUncertainty!.gainPpm).toBeCloseTo(Math.sqrt(1 / S) * 1e6, 9)
    expect(fit.standardUncertainty!.offsetV).toBeCloseTo(Math.sqrt(1 / W + mean ** 2 / S), 12)
    expect(fit.expandedUncertainty!.kGain).toBe(studentUpper(0.025, 9))
  })

  test('stated u: infinite degrees of freedom while χ² is no larger than n - 2, external consistency above', () => {
    const points = pointsOnLine(design, codes, 0, 0, scatter)
    const calm = fitPoints(
      design,
      points.map((p) => ({ ...p, uncertainty: 1e-4 })),
    ).fit
    expect([calm.dof, calm.dofWhy]).toEqual([null, 'known-u'])
    expect(calm.expandedUncertainty!.kGain).toBeCloseTo(1.959963984540054, 12)
    const tight = fitPoints(
      design,
      points.map((p) => ({ ...p, uncertainty: 1e-7 })),
    ).fit
    const free = fitPoints(design, points).fit
    expect([tight.dof, tight.dofWhy]).toEqual([3, null])
    expect(tight.chiSquared).toBeGreaterThan(3)
    // Scaled by χ²/(n - 2), equal u's give what the scatter alone gives.
    expect(tight.standardUncertainty!.gainPpm).toBeCloseTo(free.standardUncertainty!.gainPpm, 9)
  })

  test('a mixture of sources is fitted with equal weights and says so', () => {
    const points = pointsOnLine(design, codes, 1e-3, 0, scatter)
    const mixed = points.map((p, i) => (i < 2 ? { ...p, uncertainty: 1e-9 } : p))
    const { fit } = fitPoints(design, mixed)
    expect(fit.notes).toContain('mixed-uncertainty')
    expect({ ...fit, notes: [] }).toEqual(fitPoints(design, points).fit)
  })

  test('two points: the plan’s noise stands in and is noted; without it there is no uncertainty', () => {
    const points = pointsOnLine(design, [0, 65535], 1e-3, 1e-4)
    const bare = fitPoints(design, points).fit
    expect([bare.standardUncertainty, bare.expandedUncertainty, bare.dof, bare.dofWhy]).toEqual([
      null,
      null,
      null,
      'two-points',
    ])
    const planned = fitPoints(plainDesign({ measurement: { noiseV: 2e-6, readings: 4 } }), points).fit
    expect(planned.notes).toEqual(['planned-noise'])
    const span = 65535 * LSB
    expect(planned.standardUncertainty!.offsetV).toBeCloseTo(1e-6, 15)
    expect(planned.standardUncertainty!.gainPpm).toBeCloseTo(((1e-6 * Math.SQRT2) / span) * 1e6, 12)
    expect(planned.expandedUncertainty!.kGain).toBeCloseTo(1.959963984540054, 12)
  })

  test('terminal: variances of the two end means only; minimax: none', () => {
    const points = pointsOnLine(design, [0, 0, 32768, 65535], 0, 0, [0.1, -0.1, 0.3, 0]).map((p) => ({
      ...p,
      uncertainty: 1e-5,
    }))
    const ends = fitPoints(design, points, { method: 'terminal' }).fit
    const span = 65535 * LSB
    expect(ends.chiSquared).toBe(null)
    expect(ends.standardUncertainty!.offsetV).toBeCloseTo(1e-5 / Math.SQRT2, 15)
    expect(ends.standardUncertainty!.gainPpm).toBeCloseTo((Math.sqrt(1.5e-10) / span) * 1e6, 10)
    expect(ends.standardUncertainty!.covarianceVPpm).toBeCloseTo((-0.5e-10 / span) * 1e6, 12)
    const peak = fitPoints(design, points, { method: 'minimax' }).fit
    expect([peak.standardUncertainty, peak.dof, peak.dofWhy, peak.chiSquared]).toEqual([
      null,
      null,
      'minimax',
      null,
    ])
  })

  test('the instrument adds limit/√3 to gain and offset, never averaged, with Welch-Satterthwaite', () => {
    const points = pointsOnLine(design, codes, 0, 0, scatter)
    const alone = fitPoints(design, points).fit.standardUncertainty!
    const instrument = { id: 'DMM-07', gainPpm: 3, offsetV: 2e-6 }
    const { fit } = fitPoints(design, points, { instrument })
    const std = fit.standardUncertainty!
    expect(std.gainPpm ** 2 - alone.gainPpm ** 2).toBeCloseTo(3, 9)
    expect((std.offsetV ** 2 - alone.offsetV ** 2) / (4e-12 / 3)).toBeCloseTo(1, 6)
    expect(std.covarianceVPpm).toBeCloseTo(alone.covarianceVPpm, 12)
    const dof = 3 * (std.gainPpm / alone.gainPpm) ** 4
    expect(fit.expandedUncertainty!.kGain).toBeCloseTo(studentUpper(0.025, dof), 9)
    expect(fit.expandedUncertainty!.kGain).toBeLessThan(studentUpper(0.025, 3))
    expect(fit.instrument).toEqual(instrument)
    expect(
      fitPoints(plainDesign({ measurement: { instrument } }), points, { instrument: null }).fit.instrument,
    ).toBe(null)
  })

  test('read at the low end of a bipolar range, the instrument’s gain is in the offset too: (x0·u_ig)²', () => {
    const bipolar = plainDesign({ lowV: -10, highV: 10, range: { offsetAt: 'low-end' } })
    const points = pointsOnLine(bipolar, codes, 0, 0, scatter)
    const alone = fitPoints(bipolar, points).fit.standardUncertainty!
    const { standardUncertainty: std } = fitPoints(bipolar, points, {
      instrument: { gainPpm: 3, offsetV: 0 },
    }).fit
    expect((std!.offsetV ** 2 - alone.offsetV ** 2) / (100 * 3e-12)).toBeCloseTo(1, 6)
    expect((std!.covarianceVPpm - alone.covarianceVPpm) / (-10 * 3e-6)).toBeCloseTo(1, 6)
  })

  test('the plotted band at x is the fit’s part plus (u_ig·x)² + u_io², and meets the offset’s at x0', () => {
    const instrument = { gainPpm: 3, offsetV: 2e-6 }
    const points = pointsOnLine(design, codes, 1e-3, 2e-4, scatter)
    const result = fitPoints(design, points, { instrument })
    const line = errorLine(design, result)
    const std = result.fit.standardUncertainty!
    expect(line.errorAt(0)).toBe(result.fit.offsetErrorV)
    expect(line.errorAt(10 - LSB)).toBeCloseTo(result.fit.fullScaleErrorV, 12)
    expect(line.standardUncertaintyAt(0)).toBeCloseTo(std.offsetV, 15)
    expect(line.errorUncertaintyAt(0)).toBeCloseTo(result.fit.expandedUncertainty!.offsetV, 12)
    const bare = errorLine(design, fitPoints(design, points, { instrument: null }))
    const { offsetV, gainPpm, covarianceVPpm } = fitPoints(design, points, { instrument: null }).fit
      .standardUncertainty!
    const at7 = offsetV ** 2 + (2 * 7 * covarianceVPpm) / 1e6 + (49 * gainPpm ** 2) / 1e12
    expect(bare.standardUncertaintyAt(7)! ** 2 / at7).toBeCloseTo(1, 9)
    const added = line.standardUncertaintyAt(7)! ** 2 - bare.standardUncertaintyAt(7)! ** 2
    expect(added / (49 * 3e-12 + 4e-12 / 3)).toBeCloseTo(1, 6)
    expect(line.predictedErrorAt(3)).toBe(null)
  })

  test('full-scale error is O + G·(x_FS - x0)', () => {
    const { fit } = fitPoints(design, pointsOnLine(design, codes, 1e-3, 2e-4))
    expect(fit.fullScaleErrorV).toBeCloseTo(1e-3 + 2e-4 * (10 - LSB), 12)
  })

  test('points over 1 K apart are noted', () => {
    const points = pointsOnLine(design, codes, 0, 0, scatter)
    const at = (last: number) => points.map((p, i) => ({ ...p, temperatureC: i === 4 ? last : 23 }))
    expect(fitPoints(design, at(24.1)).fit.notes).toEqual(['temperature-spread'])
    expect(fitPoints(design, at(24)).fit.notes).toEqual([])
  })
})
