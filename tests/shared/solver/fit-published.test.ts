import { describe, expect, test } from 'vitest'
import { studentUpper } from '../../../shared/solver/distribution/student.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { fitBest } from '../../../shared/solver/fit-best.ts'
import { bestLine } from '../../../shared/solver/fit-minimax.ts'
import { leastSquares } from '../../../shared/solver/least-squares.ts'
import type { PointSet } from '../../../shared/solver/points.ts'
import { plainDesign, vector } from '../../support/solver-fixtures.ts'

type Norris = {
  x: string[]
  y: string[]
  certified: Record<'B0' | 'B1' | 'sd_B0' | 'sd_B1' | 'residual_sd' | 'df_residual', string>
  extra_not_certified: { cov_B0_B1: string }
}
type Gum = {
  t0: string
  t_k: string[]
  b_k: string[]
  published: Record<'y1' | 'u_y1' | 'y2' | 'u_y2' | 'r_y1_y2' | 's', string> & { dof: number }
}
type Lines = {
  V_in_LSB: string[]
  end_point: Record<'gain' | 'offset_at_code_0_LSB' | 'offset_at_code_4_LSB' | 'INL_max_LSB', string> & {
    INL_k_LSB: string[]
  }
}

const fraction = (text: string): number => {
  const [top = '', bottom = '1'] = text.split('/')
  return Number(top) / Number(bottom)
}
const relative = (got: number, wanted: number) => Math.abs(got / wanted - 1)

/** Bare abscissas and ordinates as the fit reads points. */
function setOf(z: number[], e: number[]): PointSet {
  return {
    n: z.length,
    codes: z.map((_, i) => i),
    x: z,
    y: e,
    e,
    z,
    u: null,
    stated: z.map(() => 0),
    uDof: Number.POSITIVE_INFINITY,
    source: 'none',
    readings: z.map(() => null),
    distinct: z.length,
    notes: [],
  }
}
const noNoise = { noiseV: null, readings: 1 }

describe('published lines', () => {
  test('NIST StRD Norris: coefficients and standard deviations to 1e-11 (nist-norris.json)', () => {
    const { x, y, certified, extra_not_certified } = vector<Norris>('nist-norris.json')
    const line = fitBest(setOf(x.map(Number), y.map(Number)), noNoise)
    expect(relative(line.gain, Number(certified.B1))).toBeLessThan(1e-11)
    expect(relative(line.offset, Number(certified.B0))).toBeLessThan(1e-11)
    expect(relative(Math.sqrt(line.variance!.offset), Number(certified.sd_B0))).toBeLessThan(1e-11)
    expect(relative(Math.sqrt(line.variance!.gain), Number(certified.sd_B1))).toBeLessThan(1e-11)
    expect(line.dof).toBe(Number(certified.df_residual))
    expect(relative(line.variance!.cov, Number(extra_not_certified.cov_B0_B1))).toBeLessThan(1e-9)
  })

  test('Norris shifted by a million keeps its slope to 1e-11: the data are centred first', () => {
    const { x, y, certified } = vector<Norris>('nist-norris.json')
    const far = leastSquares(
      x.map((v) => Number(v) + 1e6),
      y.map(Number),
      null,
    )
    expect(relative(far.gain, Number(certified.B1))).toBeLessThan(1e-11)
  })

  test('JCGM 100:2008 H.3: the thermometer’s line, uncertainties and correlation as printed (gum-h3.json)', () => {
    const { t0, t_k, b_k, published } = vector<Gum>('gum-h3.json')
    const line = fitBest(
      setOf(
        t_k.map((t) => Number(t) - Number(t0)),
        b_k.map(Number),
      ),
      noNoise,
    )
    const { offset, gain, cov } = line.variance!
    expect(line.offset.toFixed(4)).toBe(published.y1)
    expect(Math.sqrt(offset).toFixed(4)).toBe(published.u_y1)
    expect(line.gain.toFixed(5)).toBe(published.y2)
    expect(Math.sqrt(gain).toFixed(5)).toBe(published.u_y2)
    expect((cov / Math.sqrt(offset * gain)).toFixed(3)).toBe(published.r_y1_y2)
    expect(line.dof).toBe(published.dof)
    // b(30 °C) = -0.1494 °C with u = 0.0041 °C (H.3.3); t(0.975) of 9 degrees of freedom is 2.26 (table G.2).
    expect((line.offset + 10 * line.gain).toFixed(4)).toBe('-0.1494')
    expect(Math.sqrt(offset + 20 * cov + 100 * gain).toFixed(4)).toBe('0.0041')
    expect(studentUpper(0.025, line.dof).toFixed(2)).toBe('2.26')
  })

  test('end-point line of a 3-bit characteristic (line-conventions.json)', () => {
    const { V_in_LSB, end_point } = vector<Lines>('line-conventions.json')
    // One LSB is 1 V on a 4-bit converter of 0 V to 16 V; the characteristic fills its lower half.
    const design = plainDesign({ bits: 4, lowV: 0, highV: 16 })
    const points = V_in_LSB.map((v, code) => ({ code, measured: fraction(v) }))
    const { fit } = fitPoints(design, points, { method: 'terminal' })
    expect(fit.offsetErrorV).toBeCloseTo(fraction(end_point.offset_at_code_0_LSB), 14)
    expect(fit.gainErrorPpm).toBeCloseTo((fraction(end_point.gain) - 1) * 1e6, 8)
    expect(fit.linearity.maxLsb).toBeCloseTo(fraction(end_point.INL_max_LSB), 13)
    expect(fit.linearity.atCode).toBe(3)
    expect(fit.residuals.map(({ residualLsb }) => residualLsb)).toEqual(
      end_point.INL_k_LSB.map((v) => expect.closeTo(fraction(v), 13)),
    )
    const at4 = fit.offsetErrorV + (fit.gainErrorPpm / 1e6) * 4
    expect(at4).toBeCloseTo(fraction(end_point.offset_at_code_4_LSB), 13)
  })

  test('the same characteristic: least squares has the smallest sum, minimax the smallest peak', () => {
    const { V_in_LSB } = vector<Lines>('line-conventions.json')
    const design = plainDesign({ bits: 4, lowV: 0, highV: 16 })
    const points = V_in_LSB.map((v, code) => ({ code, measured: fraction(v) }))
    const [best, peak, ends] = (['best-fit', 'minimax', 'terminal'] as const).map(
      (method) => fitPoints(design, points, { method }).fit,
    )
    const squares = (fit: typeof best) => fit!.residuals.reduce((sum, r) => sum + r.residualV ** 2, 0)
    expect(squares(best)).toBeLessThan(squares(peak))
    expect(squares(best)).toBeLessThan(squares(ends))
    expect(peak!.linearity.maxV).toBeLessThan(best!.linearity.maxV)
    expect(peak!.linearity.maxV).toBeLessThan(ends!.linearity.maxV)
  })

  test('minimax of a symmetric bow lies halfway: de la Vallée Poussin by hand', () => {
    const line = bestLine([
      { z: 0, e: 0 },
      { z: 1, e: 1 },
      { z: 2, e: 0 },
    ])
    expect(line).toEqual({ offset: 0.5, gain: 0 })
  })
})
