import { describe, expect, test } from 'vitest'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { pointsOnLine } from '../../support/solver-fixtures.ts'
import { adjuster, handDesign, sizingExample } from './designs.ts'

const lineOf = (design: SizingDesign, name: string) =>
  sizeDesign(design).residual.lines.find((line) => line.name === name)!

describe('residual after trim', () => {
  test('unipolar-18, by hand from the example’s expected steps', () => {
    const { residual } = sizeDesign(sizingExample('unipolar-18'))
    const full = 10 - 10 / 262144
    const gainStep = 0.00017930492163110705 * 0.00208 * full
    const offsetStep = 0.001220703125 * 0.01
    const wanted: Record<string, number> = {
      'Reference drift': 20e-6 * full,
      'Converter INL': 10 / 262144,
      'Quantising, offset': offsetStep / 2,
      'Quantising, gain': gainStep / 2,
      'Auxiliary INL, gain': gainStep,
      'Auxiliary drift, gain': 5e-6 * 4096 * gainStep * 20,
    }
    expect(new Set(residual.lines.map(({ name }) => name))).toEqual(new Set(Object.keys(wanted)))
    for (const line of residual.lines) expect(line.worstV / wanted[line.name]!).toBeCloseTo(1, 9)
    expect(residual.lines.map(({ worstV }) => worstV)).toEqual(
      residual.lines.map(({ worstV }) => worstV).sort((a, b) => b - a),
    )
    expect(residual.worstCaseV).toBeCloseTo(
      Object.values(wanted).reduce((sum, value) => sum + value, 0),
      15,
    )
    expect(residual.atV).toBe(full)
    const { lines } = residual
    expect(lines.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 12)
    const squares = lines.reduce((sum, { standardV }) => sum + standardV * standardV, 0)
    expect(residual.rssV).toBeCloseTo(2 * Math.sqrt(squares), 15)
  })

  test('closed form: quantising of one adjuster is a rectangular line of half a step', () => {
    const design = handDesign({ adjusters: { offset: adjuster({ alpha: 1 }) } })
    const line = lineOf(design, 'Quantising, offset')
    expect(line.worstV).toBe(1 / 4096)
    expect(line.standardV).toBeCloseTo(line.worstV / Math.sqrt(3), 18)
  })

  test('a bias of a drift line stands in both sums', () => {
    const budget = {
      gain: [],
      offset: [
        { name: 'O', limitV: 1e-3, distribution: 'rectangular', when: 'initial' },
        { name: 'D', limitV: 3e-4, nominalV: -2e-4, distribution: 'rectangular', when: 'drift' },
      ] as const,
    }
    const biased = sizeDesign(handDesign({ budget }))
    const plain = sizeDesign(
      handDesign({ budget: { gain: [], offset: [budget.offset[0], { ...budget.offset[1], nominalV: 0 }] } }),
    )
    expect(biased.residual.worstCaseV - plain.residual.worstCaseV).toBeCloseTo(2e-4, 15)
    expect(biased.residual.rssV - plain.residual.rssV).toBeCloseTo(2e-4, 15)
  })

  test('the end that is worse: a drift that turns about the high end counts at the low one', () => {
    const gain = { name: 'D', limitPpm: 50, distribution: 'rectangular', when: 'drift', pivotV: 10 } as const
    const { residual } = sizeDesign(handDesign({ budget: { gain: [gain], offset: [] } }))
    expect(residual.atV).toBe(0)
    expect(residual.lines[0]).toMatchObject({ name: 'D', path: 'gain' })
    expect(residual.lines[0]!.worstV).toBeCloseTo(5e-4, 15)
  })

  test.each(['best-fit', 'terminal'] as const)(
    'measurement, %s: twice what a fit of the plan reports at that end',
    (method) => {
      const points = [0, 16384, 32768, 49152, 65535]
      const noiseV = 1e-5
      const design = handDesign({ measurement: { method, points, noiseV, readings: 4 } })
      // Stated uncertainties of noiseV/√4 and readings that lie on a line: χ² is 0 and the fit's u is the plan's.
      const measured = pointsOnLine(design, points, 0, 0).map((point) => ({
        ...point,
        uncertainty: noiseV / 2,
      }))
      const { fit } = fitPoints(design, measured)
      const { offsetV, gainPpm, covarianceVPpm } = fit.standardUncertainty!
      const z = 10 - 10 / 65536
      const u2 = offsetV ** 2 + z * (2 * (covarianceVPpm / 1e6) + z * (gainPpm / 1e6) ** 2)
      const line = lineOf(design, 'Measurement')
      expect(line.worstV / (2 * Math.sqrt(u2))).toBeCloseTo(1, 9)
    },
  )

  test('the instrument’s limits', () => {
    const design = handDesign({
      measurement: { points: [0, 65535], instrument: { gainPpm: 3, offsetV: 2e-6 } },
    })
    expect(lineOf(design, 'Instrument gain').worstV).toBeCloseTo(3e-6 * (10 - 10 / 65536), 15)
    expect(lineOf(design, 'Instrument offset').worstV).toBe(2e-6)
  })

  test('one adjuster: what it cannot reach is a line of its own', () => {
    const design = handDesign({ adjusters: { gain: adjuster({ beta: 1e-3 }) } })
    const { residual, remarks } = sizeDesign(design)
    // Offset 1 mV stays at the low end; at full scale it is nulled.
    expect(residual.atV).toBe(0)
    expect(residual.lines[0]!.name).toBe('Not trimmed, no offset adjuster')
    expect(residual.lines[0]!.worstV).toBeCloseTo(1e-3, 15)
    expect(remarks.map(({ path }) => path)).toEqual(['/adjusters'])
  })
})

test('one adjuster: a bias counts by its size, whatever its sign', () => {
  const left = (nominalV: number) => {
    const offset = [
      { name: 'O', limitV: 1e-3, nominalV, distribution: 'rectangular', when: 'initial' },
    ] as const
    const design = handDesign({ adjusters: { gain: adjuster({ beta: 1e-3 }) }, budget: { gain: [], offset } })
    return lineOf(design, 'Not trimmed, no offset adjuster').worstV
  }
  expect(left(5e-4)).toBeCloseTo(1.5e-3, 15)
  expect(left(-5e-4)).toBeCloseTo(1.5e-3, 15)
})

describe('passes', () => {
  test('closed form: τ^p·E·R + ½s·E <= T', () => {
    // One adjuster: E = 1e-2, R = 0.1 V, so 1 mV; τ 0.1; target 152.6 uV; half a step 2.44 uV.
    const design = handDesign({ adjusters: { offset: adjuster({ alpha: 1e-2, effectTolerance: 0.1 }) } })
    const passes = (value: number, unit: 'V' | 'LSB' = 'V') =>
      sizeDesign({ ...design, target: { residual: { value, unit } } }).passes.withNominalEffect
    const half = (2 / 4096) * 1e-2 * 0.5
    expect(passes(1e-4 + half)).toBe(1)
    expect(passes(1e-4 + half * 0.99)).toBe(2)
    expect(passes(1e-6 + half)).toBe(3)
    expect(passes(half * 0.99)).toBe(null)
  })

  test('never more than nine', () => {
    const design = handDesign({
      adjusters: { offset: adjuster({ alpha: 1e-2, effectTolerance: 0.9, source: { bits: 20 } }) },
    })
    expect(sizeDesign(design).passes.withNominalEffect).toBe(null)
  })

  test('unipolar-18: four with the stated effect, two with the learned one', () => {
    expect(sizeDesign(sizingExample('unipolar-18')).passes).toEqual({
      withNominalEffect: 4,
      withMeasuredEffect: 2,
    })
  })

  test('nothing is learned from fits without variances, nor from noise that hides the move', () => {
    const design = handDesign({ adjusters: { offset: adjuster({ alpha: 1e-2, effectTolerance: 0.3 }) } })
    const target = { residual: { value: 1e-5, unit: 'V' as const } }
    const of = (measurement: SizingDesign['measurement']) =>
      sizeDesign({ ...design, target, measurement }).passes
    const points = [0, 32768, 65535]
    const { withNominalEffect } = of({ points })
    expect(withNominalEffect).toBe(5)
    expect(of({ points }).withMeasuredEffect).toBe(2)
    expect(of({ points, method: 'minimax' }).withMeasuredEffect).toBe(withNominalEffect)
    expect(of({ points, noiseV: 1e-3 }).withMeasuredEffect).toBe(withNominalEffect)
  })
})
