import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { chiSquaredUpper } from '../../../shared/solver/distribution/chi-squared.ts'
import { fisherUpper } from '../../../shared/solver/distribution/fisher.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { plainDesign, pointsOnLine } from '../../support/solver-fixtures.ts'

const design = plainDesign()
const LSB = 10 / 65536
const codes = [0, 10923, 21845, 32768, 43690, 54613, 65535]
const calm = [0.01, -0.02, 0.015, 0.01, -0.015, -0.01, 0.01]
const flagsAt = (deviations: number[], d = design) =>
  fitPoints(d, pointsOnLine(d, codes, 1e-3, 1e-4, deviations)).fit.flags

describe('flags', () => {
  test('calm points raise none', () => {
    expect(flagsAt(calm)).toEqual([])
  })

  test('one wrong point is an outlier at its code, with how far it stands off the line of the others', () => {
    const [flag, ...rest] = flagsAt(calm.map((d, i) => (i === 2 ? 3 : d)))
    expect(rest).toEqual([])
    expect(flag).toMatchObject({ flag: 'outlier', code: 21845, limit: 0.25, unit: 'LSB' })
    const others = pointsOnLine(design, codes, 1e-3, 1e-4, calm).filter((_, i) => i !== 2)
    const { fit } = fitPoints(design, others)
    const x = 21845 * LSB
    const off = (1e-3 + 1e-4 * x + 3 * LSB - fit.offsetErrorV - (fit.gainErrorPpm / 1e6) * x) / LSB
    expect(flag!.value).toBeCloseTo(off, 6)
  })

  test('an outlier among points that fit exactly is found: s of the others is zero and t infinite', () => {
    const flags = flagsAt([0, 0, 0, 1, 0, 0, 0])
    expect(flags.filter(({ flag }) => flag === 'outlier')).toMatchObject([{ code: 32768 }])
  })

  test('under a quarter of an LSB no point is an outlier, however far it stands from its tight neighbours', () => {
    expect(flagsAt([0, 0, 0, 0.2, 0, 0, 0])).toEqual([])
  })

  test('three points never make an outlier', () => {
    const points = pointsOnLine(design, [0, 32768, 65535], 0, 0, [0, 5, 0])
    expect(fitPoints(design, points).fit.flags).toEqual([])
  })

  test('a bow is measured in LSB at the middle, positive when the middle is high', () => {
    const high = codes.map((code) => 4 * (code / 65535) * (1 - code / 65535))
    const [flag] = flagsAt(high)
    expect(flag).toMatchObject({ flag: 'bow', code: null, limit: 0.25, unit: 'LSB' })
    expect(flag!.value).toBeCloseTo(1, 6)
    expect(flagsAt(high.map((d) => -d))[0]!.value).toBeCloseTo(-1, 6)
    expect(flagsAt(high.map((d) => d / 5))).toEqual([])
  })

  test('readings that drift over the limit are unsettled; scatter of the same size is not', () => {
    const at = (readings: number[]) =>
      fitPoints(
        design,
        [0, 32768, 65535].map((code) => ({
          code,
          readings: readings.map((r) => code * LSB + (code === 32768 ? r : readings[0]! * 0) * LSB),
        })),
      ).fit.flags
    expect(at([0, 1, 2, 3, 4])).toMatchObject([
      { flag: 'unsettled', code: 32768, value: expect.closeTo(4, 6), limit: 0.25, unit: 'LSB' },
    ])
    expect(at([0, -1, -2, -3, -4])).toMatchObject([{ value: expect.closeTo(-4, 6) }])
    expect(at([0, 3, -2, 4, 1])).toEqual([])
    expect(at([0, 0.05, 0.1, 0.15, 0.2])).toEqual([])
    expect(at([0, 1, 2])).toEqual([])
  })

  test('points on less than 0.8 of the codes are narrow', () => {
    const span = (top: number) => fitPoints(design, pointsOnLine(design, [0, 1000, top], 0, 0)).fit.flags
    expect(span(52427)).toMatchObject([{ flag: 'narrow', code: null, limit: 0.8 }])
    expect(span(52428)).toEqual([])
  })

  test('residuals that the stated uncertainties and the linearity cannot explain are inconsistent', () => {
    const wave = [1, -1, 1, 0, -1, 1, -1]
    const at = (amplitude: number, u: number, inlLsb: number) => {
      const d = plainDesign({ inlLsb })
      const points = pointsOnLine(
        d,
        codes,
        0,
        0,
        wave.map((v) => v * amplitude),
      )
      return fitPoints(
        d,
        points.map((p) => ({ ...p, uncertainty: u * LSB })),
      ).fit.flags.filter(({ flag }) => flag === 'inconsistent')
    }
    const [flag] = at(0.2, 0.01, 0)
    expect(flag!.limit).toBeCloseTo(chiSquaredUpper(0.001, 5), 9)
    expect(flag!.value).toBeGreaterThan(flag!.limit!)
    expect(at(0.2, 0.01, 1)).toEqual([])
    expect(at(0.2, 0.2, 0)).toEqual([])
  })

  test('with uncertainties from readings the limit is (n - 2)·F', () => {
    const d = plainDesign({ inlLsb: 0 })
    const points = pointsOnLine(d, codes, 0, 0, [1, -1, 1, 0, -1, 1, -1]).map(({ code, measured }) => ({
      code,
      readings: [measured! - 1e-7, measured! + 1e-7],
    }))
    const flag = fitPoints(d, points).fit.flags.find(({ flag }) => flag === 'inconsistent')
    expect(flag!.limit).toBeCloseTo(5 * fisherUpper(0.001, 5, 7), 6)
  })

  test('outlier, unsettled and inconsistent make the codes suspect; bow and narrow do not', () => {
    const verdict = (deviations: number[]) =>
      computeCodes(plainDesign({ targetLsb: 1000 }), pointsOnLine(design, codes, 1e-3, 1e-4, deviations)).trim
    const wrong = verdict(calm.map((d, i) => (i === 2 ? 3 : d)))
    expect([wrong.verdict, wrong.reasons]).toEqual(['suspect', ['suspect']])
    expect(wrong.codes).not.toBe(null)
    expect(verdict(codes.map((code) => 4 * (code / 65535) * (1 - code / 65535))).verdict).toBe('ok')
  })
})
