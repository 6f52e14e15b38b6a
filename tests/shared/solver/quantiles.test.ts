import { describe, expect, test } from 'vitest'
import { chiSquaredUpper } from '../../../shared/solver/distribution/chi-squared.ts'
import { exp, ln, ln1p, powerOfTwo } from '../../../shared/solver/distribution/elementary.ts'
import { fisherUpper } from '../../../shared/solver/distribution/fisher.ts'
import { erfc, normalBelow, normalUpper } from '../../../shared/solver/distribution/normal.ts'
import { studentUpper } from '../../../shared/solver/distribution/student.ts'
import { vector } from '../../support/solver-fixtures.ts'

type Table = { columns_percent: string[]; rows: { nu: string; t: string[] }[] }
type Quantiles = {
  student: [string, string, string][]
  chiSquared: [string, string, string][]
  fisher: [string, string, string, string][]
  normal: [string, string][]
}

const relative = (got: number, wanted: number) => Math.abs(got / wanted - 1)
const computed = vector<Quantiles>('quantiles.json')

describe('quantiles', () => {
  test('t equals JCGM 100:2008 table G.2 in every printed digit but its known misprint', () => {
    const table = vector<Table>('gum-table-g2.json')
    // These three columns are the shares within 1, 2 and 3 standard deviations, printed with four digits.
    const sigmas: Record<string, number> = { '68.27': 1, '95.45': 2, '99.73': 3 }
    const wrong = table.rows.flatMap(({ nu, t }) =>
      t.flatMap((printed, i) => {
        const percent = table.columns_percent[i]!
        const sigma = sigmas[percent]
        const tail = sigma === undefined ? (1 - Number(percent) / 100) / 2 : normalBelow(-sigma)
        const dof = nu === 'inf' ? Number.POSITIVE_INFINITY : Number(nu)
        const digits = printed.split('.')[1]!.length
        const got = studentUpper(tail, dof)
        return Math.abs(got - Number(printed)) <= 0.5000001 * 10 ** -digits
          ? []
          : [`${nu} ${percent} ${printed}`]
      }),
    )
    expect(wrong).toEqual(['35 90 1.70'])
  })

  test('t, χ², F and normal equal independently computed values to 1e-12 (quantiles.json: mpmath, 50 digits)', () => {
    for (const [tail, dof, value] of computed.student) {
      expect(
        relative(studentUpper(Number(tail), Number(dof)), Number(value)),
        `t ${tail} ${dof}`,
      ).toBeLessThan(1e-12)
    }
    for (const [tail, dof, value] of computed.chiSquared) {
      expect(
        relative(chiSquaredUpper(Number(tail), Number(dof)), Number(value)),
        `χ² ${tail} ${dof}`,
      ).toBeLessThan(1e-12)
    }
    for (const [tail, a, b, value] of computed.fisher) {
      const got = fisherUpper(Number(tail), Number(a), Number(b))
      expect(relative(got, Number(value)), `F ${tail} ${a} ${b}`).toBeLessThan(1e-12)
    }
    for (const [tail, value] of computed.normal) {
      expect(relative(normalUpper(Number(tail)), Number(value)), `z ${tail}`).toBeLessThan(1e-12)
    }
  })

  test('textbook values: χ² 95 % and 99.9 % of 10, F 95 % of (4, 6)', () => {
    expect(chiSquaredUpper(0.05, 10)).toBeCloseTo(18.307, 3)
    expect(chiSquaredUpper(0.001, 10)).toBeCloseTo(29.588, 3)
    expect(fisherUpper(0.05, 4, 6)).toBeCloseTo(4.534, 3)
  })

  test('closed forms: t of 1 and 2 degrees of freedom, χ² of 2', () => {
    for (const tail of [0.4, 0.1, 0.025, 0.001]) {
      expect(relative(studentUpper(tail, 1), 1 / Math.tan(Math.PI * tail))).toBeLessThan(1e-12)
      const a = 1 - 2 * tail
      expect(relative(studentUpper(tail, 2), a * Math.sqrt(2 / (1 - a * a)))).toBeLessThan(1e-12)
      expect(relative(chiSquaredUpper(tail, 2), -2 * Math.log(tail))).toBeLessThan(1e-12)
    }
  })

  test('both sides of the switch to the expansion at 5000 degrees of freedom agree', () => {
    for (const tail of [0.025, 0.0005, 1e-6]) {
      const step = studentUpper(tail, 4999.999) / studentUpper(tail, 5000) - 1
      expect(step).toBeGreaterThan(0)
      expect(step).toBeLessThan(1e-8)
    }
  })

  test('symmetry: the other tail is the negative, F turns over, Φ adds to one', () => {
    expect(studentUpper(0.975, 7)).toBe(-studentUpper(1 - 0.975, 7))
    expect(fisherUpper(0.9, 3, 8)).toBeCloseTo(1 / fisherUpper(0.1, 8, 3), 12)
    for (const z of [0.1, 1, 2.5, 6]) expect(normalBelow(z) + normalBelow(-z)).toBeCloseTo(1, 15)
  })

  test('ln, exp, ln(1 + u) and erfc follow the built-in functions to a few units of the last place', () => {
    for (let x = -40; x <= 40; x += 0.37) {
      expect(relative(exp(x), Math.exp(x))).toBeLessThan(5e-16 + Math.abs(x) * 1e-17)
      const v = Math.exp(x)
      expect(Math.abs(ln(v) - Math.log(v))).toBeLessThan(4e-16 * Math.max(1, Math.abs(x)))
    }
    for (const u of [-0.9, -0.3, -1e-10, 1e-10, 0.2, 3])
      expect(relative(ln1p(u), Math.log1p(u))).toBeLessThan(5e-16)
    expect(erfc(1)).toBeCloseTo(0.15729920705028513, 15)
    expect(powerOfTwo(24)).toBe(2 ** 24)
    expect(powerOfTwo(-30)).toBe(2 ** -30)
  })
})
