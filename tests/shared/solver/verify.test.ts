import { describe, expect, test } from 'vitest'
import { studentUpper } from '../../../shared/solver/distribution/student.ts'
import type { Design } from '../../../shared/solver/types.ts'
import { conformance, decide, verifyPoints } from '../../../shared/solver/verify.ts'
import { plainDesign, vector } from '../../support/solver-fixtures.ts'

type Rules = {
  jcgm106: {
    table1_z: { pc: string; z: string }[]
    guarded_acceptance_w_equals_U: { published_min_pc: string }
  }
} & {
  jcgm106: { one_sided_upper: Record<'y' | 'u' | 'T_U' | 'published_pc', string> }
  ilac_g8: { rows: { w_over_U: string; published: string }[] }
}
const rules = vector<Rules>('decision-rules.json')
const LSB = 10 / 65536
const judged = (rule: 'simple' | 'guarded', measurement: Design['measurement'] = {}): Design =>
  plainDesign({ measurement, decision: { rule, tolerance: { value: 1, unit: 'LSB' } } })
const at = (code: number, lsb: number, uLsb?: number) => ({
  code,
  measured: (code + lsb) * LSB,
  ...(uLsb === undefined ? {} : { uncertainty: uLsb * LSB }),
})

describe('decision', () => {
  test('simple passes up to the tolerance; guarded has four outcomes about T ± U', () => {
    expect([1, 1.0001].map((e) => decide('simple', e, 1, 0.5))).toEqual(['pass', 'fail'])
    expect([0.8, 0.81, 1, 1.01, 1.2, 1.21].map((e) => decide('guarded', e, 1, 0.2))).toEqual([
      'pass',
      'conditional-pass',
      'conditional-pass',
      'conditional-fail',
      'conditional-fail',
      'fail',
    ])
  })

  test('conformance probability as JCGM 106:2012 prints it, the other limit far away (decision-rules.json)', () => {
    const { y, u, T_U, published_pc } = rules.jcgm106.one_sided_upper
    // One-sided: |y| under T_U seen from a centre so far off that the second limit plays no part.
    const centre = Number(T_U) - 100
    expect(conformance(Number(y) - centre, 100, Number(u)).toFixed(2)).toBe(published_pc)
  })

  test('the z of each conformance probability of Table 1, and 0.977 at the edge of a guard band of 2u', () => {
    const { table1_z, guarded_acceptance_w_equals_U } = rules.jcgm106
    expect(table1_z).toHaveLength(5)
    // (T - e)/u = z: the printed z has two decimals, and the probability lies within half of the last one.
    for (const { pc, z } of table1_z) {
      expect(conformance(100 - Number(z) - 0.005, 100, 1)).toBeGreaterThanOrEqual(Number(pc))
      expect(conformance(100 - Number(z) + 0.005, 100, 1)).toBeLessThanOrEqual(Number(pc))
    }
    expect(conformance(100 - 2, 100, 1).toFixed(3)).toBe(guarded_acceptance_w_equals_U.published_min_pc)
  })

  test('a guard band of U keeps the false accept under 2.5 %, as ILAC-G8:09/2019 says (decision-rules.json)', () => {
    expect(rules.ilac_g8.rows.find(({ w_over_U }) => w_over_U === '1')!.published).toContain('2.5 %')
    const u = 0.1
    expect(1 - conformance(1 - 1.959963984540054 * u, 1, u)).toBeCloseTo(0.025, 9)
    expect(conformance(0, 1, 1)).toBeCloseTo(0.6826894921370859, 12)
    expect(conformance(-0.4, 1, 0.2)).toBe(conformance(0.4, 1, 0.2))
  })
})

describe('verification', () => {
  test('U of a point holds its own u and the instrument at its voltage, and no fit', () => {
    const design = judged('guarded', { instrument: { gainPpm: 6, offsetV: 3e-6 } })
    const { points } = verifyPoints(design, [at(0, 0.1, 0.05), at(65535, -0.2, 0.05)])
    const y = (65535 - 0.2) * LSB
    const u = Math.sqrt((0.05 * LSB) ** 2 + ((6e-6 / Math.sqrt(3)) * y) ** 2 + 9e-12 / 3)
    expect(points[1]!.expandedUncertaintyV).toBeCloseTo(1.959963984540054 * u, 12)
    expect(points[1]!.errorLsb).toBeCloseTo(-0.2, 9)
  })

  test('readings give Student’s k by Welch-Satterthwaite; without u the plan’s noise stands in', () => {
    const readings = [0, 65535].map((code) => ({ code, readings: [code * LSB - 1e-5, code * LSB + 1e-5] }))
    const { points } = verifyPoints(judged('guarded'), readings)
    expect(points[0]!.expandedUncertaintyV).toBeCloseTo(studentUpper(0.025, 2) * 1e-5, 12)
    const planned = verifyPoints(judged('guarded', { noiseV: 2e-6 }), [at(0, 0), at(65535, 0)])
    expect(planned.points[0]!.expandedUncertaintyV).toBeCloseTo(1.959963984540054 * 2e-6, 15)
  })

  test('the whole takes its worst point’s outcome, and names the point', () => {
    const result = verifyPoints(judged('guarded'), [
      at(0, 0.1, 0.05),
      at(30000, -0.95, 0.05),
      at(65535, 1.05, 0.05),
    ])
    expect(result.points.map(({ outcome }) => outcome)).toEqual([
      'pass',
      'conditional-pass',
      'conditional-fail',
    ])
    expect(result.outcome).toBe('conditional-fail')
    expect(result.worst).toMatchObject({ code: 65535, errorLsb: expect.closeTo(1.05, 9) })
    expect(verifyPoints(judged('guarded'), [at(0, 0.1, 0.05), at(65535, 3, 0.05)]).outcome).toBe('fail')
  })

  test('TUR is T/U of the least certain point; under 4 it is noted; U over T can never pass and says so', () => {
    const good = verifyPoints(judged('guarded'), [at(0, 0, 0.1), at(65535, 0, 0.05)])
    expect(good.tur).toBeCloseTo(1 / (1.959963984540054 * 0.1), 9)
    expect(good.notes).toEqual([])
    expect(verifyPoints(judged('guarded'), [at(0, 0, 0.2)]).notes).toEqual(['tur-under-4'])
    // T/U of 3.4 stands between three and four.
    expect(verifyPoints(judged('guarded'), [at(0, 0, 0.15)]).notes).toEqual(['tur-under-4'])
    const wide = verifyPoints(judged('guarded'), [at(0, 0, 0.6)])
    expect(wide.notes).toEqual(['tur-under-4', 'guard-band-too-wide'])
    expect(wide.outcome).toBe('conditional-pass')
  })

  test('without any uncertainty simple still decides and invents nothing; guarded refuses with the remedy', () => {
    const simple = verifyPoints(judged('simple'), [at(0, 0.5), at(65535, 0.9)])
    expect([simple.outcome, simple.tur]).toEqual(['pass', null])
    expect(simple.points[0]).toMatchObject({ expandedUncertaintyV: null, conformanceProbability: null })
    expect(() => verifyPoints(judged('guarded'), [at(0, 0.5)])).toThrow('noiseV')
    expect(() => verifyPoints(plainDesign(), [at(0, 0)])).toThrow('no decision')
  })

  test('one point can be judged; its line cannot be fitted', () => {
    expect(verifyPoints(judged('guarded'), [at(0, 0.1, 0.05)]).fit).toBe(null)
    expect(verifyPoints(judged('guarded'), [at(0, 0.1, 0.05), at(9, 0, 0.05)]).fit!.n).toBe(2)
    expect(() => verifyPoints(judged('guarded'), [])).toThrow('No point')
  })
})
