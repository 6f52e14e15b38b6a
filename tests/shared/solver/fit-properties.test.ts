import fc from 'fast-check'
import { all, create, type Matrix } from 'mathjs'
import { describe, expect, test } from 'vitest'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { bestLine } from '../../../shared/solver/fit-minimax.ts'
import type { MeasuredPoint, Method } from '../../../shared/solver/types.ts'
import { plainDesign } from '../../support/solver-fixtures.ts'

const math = create(all!)
const design = plainDesign({ bits: 16, lowV: 0, highV: 10 })
const LSB = 10 / 65536
const xOf = (code: number) => code * LSB

/** Measured points: distinct codes, errors of some LSB in whole hundredths, so that sums of them are tame. */
const errors = fc
  .uniqueArray(fc.integer({ min: 0, max: 65535 }), { minLength: 3, maxLength: 12 })
  .chain((codes) =>
    fc.tuple(
      fc.constant(codes),
      fc.array(fc.integer({ min: -2000, max: 2000 }), { minLength: codes.length, maxLength: codes.length }),
    ),
  )
const toPoints = ([codes, hundredths]: [number[], number[]]): MeasuredPoint[] =>
  codes.map((code, i) => ({ code, measured: xOf(code) + (hundredths[i]! / 100) * LSB }))
const methods: readonly Method[] = ['best-fit', 'minimax', 'terminal']

describe('fit, for any points', () => {
  test('best fit and its covariance equal mathjs on the normal equations, weighted and not', () => {
    const u = fc.array(fc.integer({ min: 5, max: 50 }), { minLength: 12, maxLength: 12 })
    fc.assert(
      fc.property(errors, u, fc.boolean(), (drawn, weights, weighted) => {
        const points = toPoints(drawn).map((p, i) =>
          weighted ? { ...p, uncertainty: weights[i]! * 1e-5 } : p,
        )
        const { fit } = fitPoints(design, points)
        // Scaled to LSB and full scale so that the normal equations stay conditioned.
        const rows = points.map((p) => [1, xOf(p.code!) / 10])
        const w = points.map((p) => (weighted ? 1 / (p.uncertainty! / LSB) ** 2 : 1))
        const e = points.map((p) => (p.measured! - xOf(p.code!)) / LSB)
        const at = math.transpose(math.matrix(rows.map((row, i) => row.map((v) => v * w[i]!))))
        const normal = math.multiply(at, math.matrix(rows)) as Matrix
        const [[o = 0] = [], [g = 0] = []] = (
          math.lusolve(normal, math.multiply(at, e)) as Matrix
        ).toArray() as number[][]
        const inverse = (math.inv(normal) as Matrix).toArray() as number[][]
        const r = e.map((v, i) => v - o - g * rows[i]![1]!)
        const chi2 = r.reduce((sum, v, i) => sum + w[i]! * v * v, 0)
        const free = points.length - 2
        const factor = weighted ? Math.max(1, chi2 / free) : chi2 / free
        expect(fit.offsetErrorV / LSB).toBeCloseTo(o, 6)
        expect((fit.gainErrorPpm / 1e6) * (10 / LSB)).toBeCloseTo(g, 6)
        if (factor < 1e-12) return
        const std = fit.standardUncertainty!
        expect((std.offsetV / LSB) ** 2 / (inverse[0]![0]! * factor)).toBeCloseTo(1, 6)
        expect(((std.gainPpm / 1e6) * (10 / LSB)) ** 2 / (inverse[1]![1]! * factor)).toBeCloseTo(1, 6)
        expect(((std.covarianceVPpm / 1e6) * 10) / LSB / LSB / (inverse[0]![1]! * factor)).toBeCloseTo(1, 6)
      }),
      { numRuns: 60 },
    )
  })

  test.each(methods)('%s: the order of the points changes no bit', (method) => {
    fc.assert(
      fc.property(errors, fc.infiniteStream(fc.nat()), (drawn, keys) => {
        const points = toPoints(drawn)
        const shuffled = points
          .map((p) => ({ p, key: keys.next().value as number }))
          .sort((a, b) => a.key - b.key)
          .map(({ p }) => p)
        expect(fitPoints(design, shuffled, { method })).toEqual(fitPoints(design, points, { method }))
      }),
    )
  })

  test.each(methods)(
    '%s: adding a line to the errors adds it to the fit and leaves the residuals',
    (method) => {
      fc.assert(
        fc.property(
          errors,
          fc.integer({ min: -500, max: 500 }),
          fc.integer({ min: -500, max: 500 }),
          (drawn, o, g) => {
            const points = toPoints(drawn)
            const moved = points.map((p) => ({
              ...p,
              measured: p.measured! + o * LSB + (g / 1e6) * xOf(p.code!),
            }))
            const a = fitPoints(design, points, { method }).fit
            const b = fitPoints(design, moved, { method }).fit
            expect((b.offsetErrorV - a.offsetErrorV) / LSB).toBeCloseTo(o, 5)
            expect(b.gainErrorPpm - a.gainErrorPpm).toBeCloseTo(g, 3)
            for (const [i, r] of a.residuals.entries())
              expect(b.residuals[i]!.residualLsb).toBeCloseTo(r.residualLsb, 5)
          },
        ),
      )
    },
  )

  test.each(methods)('%s: a range scaled by two scales volts by two and leaves ppm and LSB', (method) => {
    const wide = plainDesign({ bits: 16, lowV: 0, highV: 20 })
    fc.assert(
      fc.property(errors, (drawn) => {
        const points = toPoints(drawn)
        const a = fitPoints(design, points, { method }).fit
        const b = fitPoints(
          wide,
          points.map((p) => ({ ...p, measured: p.measured! * 2 })),
          { method },
        ).fit
        expect(b.offsetErrorV).toBe(2 * a.offsetErrorV)
        expect(b.gainErrorPpm).toBe(a.gainErrorPpm)
        expect(b.linearity).toEqual({ ...a.linearity, maxV: 2 * a.linearity.maxV })
        expect(b.expandedUncertainty?.kGain).toBe(a.expandedUncertainty?.kGain)
      }),
    )
  })

  test.each(methods)('%s: every point given twice leaves the line where it was', (method) => {
    fc.assert(
      fc.property(errors, (drawn) => {
        const points = toPoints(drawn)
        const a = fitPoints(design, points, { method }).fit
        const b = fitPoints(design, [...points, ...points], { method }).fit
        expect(b.offsetErrorV / LSB).toBeCloseTo(a.offsetErrorV / LSB, 6)
        expect(b.gainErrorPpm).toBeCloseTo(a.gainErrorPpm, 4)
      }),
    )
  })

  test('minimax has the smallest peak: no triple asks for more, and its own peak is that of the worst triple', () => {
    const spots = errors.map(([codes, hundredths]) =>
      codes.map((code, i) => ({ z: code / 65536, e: hundredths[i]! / 100 })).sort((a, b) => a.z - b.z),
    )
    fc.assert(
      fc.property(spots, (list) => {
        const line = bestLine(list)
        const peak = Math.max(...list.map((s) => Math.abs(s.e - line.offset - line.gain * s.z)))
        let worst = 0
        for (let i = 0; i < list.length; i++)
          for (let j = i + 1; j < list.length; j++)
            for (let k = j + 1; k < list.length; k++) {
              const [a, b, c] = [list[i]!, list[j]!, list[k]!]
              const chord = a.e + ((c.e - a.e) * (b.z - a.z)) / (c.z - a.z)
              worst = Math.max(worst, Math.abs(b.e - chord) / 2)
            }
        expect(peak).toBeCloseTo(worst, 8)
      }),
      { numRuns: 300 },
    )
  })

  test('no result ever holds a number that is not finite', () => {
    const any = fc.record({
      method: fc.constantFrom(...methods),
      noiseV: fc.constantFrom(undefined, 1e-6),
      points: fc.array(
        fc.record(
          {
            code: fc.integer({ min: 0, max: 65535 }),
            off: fc.integer({ min: -300, max: 300 }),
            uncertainty: fc.constantFrom(1e-9, 1e-3),
            repeat: fc.integer({ min: 1, max: 5 }),
          },
          { requiredKeys: ['code', 'off'] },
        ),
        { minLength: 2, maxLength: 8 },
      ),
    })
    fc.assert(
      fc.property(any, ({ method, noiseV, points }) => {
        fc.pre(new Set(points.map(({ code }) => code)).size > 1)
        const measured = points.map(({ code, off, uncertainty, repeat }) => ({
          code,
          uncertainty,
          ...(repeat
            ? { readings: Array.from({ length: repeat }, () => xOf(code) + off * LSB) }
            : { measured: xOf(code) + off * LSB }),
        }))
        const result = fitPoints(plainDesign({ measurement: { noiseV } }), measured, { method })
        expect(
          JSON.stringify(result, (_, v: unknown) =>
            typeof v === 'number' && !Number.isFinite(v) ? 'BAD' : v,
          ),
        ).not.toContain('BAD')
      }),
    )
  })
})
