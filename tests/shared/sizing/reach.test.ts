import { describe, expect, test } from 'vitest'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { adjuster, handDesign } from './designs.ts'

/** Reach, step and bits by hand: gain 1e-3 /V, offset 1e-2 V/V, ±100 ppm, ±1 mV unless changed. */
const gainOf = (design: SizingDesign) => sizeDesign(design).adjusters.gain!
const offsetOf = (design: SizingDesign) => sizeDesign(design).adjusters.offset!
const sized = (low: number, high: number, got: { requiredLowV: number; requiredHighV: number }) => {
  expect(got.requiredLowV).toBeCloseTo(low, 12)
  expect(got.requiredHighV).toBeCloseTo(high, 12)
}
const offsetLine = { name: 'O', limitV: 1e-3, distribution: 'rectangular', when: 'initial' } as const
const gainLine = { name: 'G', limitPpm: 100, distribution: 'rectangular', when: 'initial' } as const

describe('reach', () => {
  test('limits over the effects: 100 ppm/1e-3 = 0.1 V, 1 mV/1e-2 = 0.1 V', () => {
    sized(-0.1, 0.1, gainOf(handDesign()))
    sized(-0.1, 0.1, offsetOf(handDesign()))
  })

  test('margin a quarter, effect known to 20 %: times 1.25 over 0.8', () => {
    const design = handDesign({ sizing: { margin: 0.25 } })
    design.adjusters.gain!.effectTolerance = 0.2
    sized(-0.15625, 0.15625, gainOf(design))
  })

  test('drift counts, noise does not', () => {
    const lines = (when: 'drift' | 'noise') =>
      handDesign({ budget: { gain: [gainLine, { ...gainLine, when }], offset: [offsetLine] } })
    sized(-0.2, 0.2, gainOf(lines('drift')))
    sized(-0.1, 0.1, gainOf(lines('noise')))
  })

  test('a bias moves the centre against it; the end near nominal is divided by 1 + τ, the far one by 1 - τ', () => {
    const design = handDesign({
      budget: { gain: [gainLine], offset: [{ ...offsetLine, nominalV: 3e-3 }] },
    })
    design.adjusters.offset!.effectTolerance = 0.2
    // Centre -0.3 V, ±0.1 V: -0.4/0.8 and -0.2/1.2.
    sized(-0.5, -0.2 / 1.2, offsetOf(design))
  })

  test('about nominal', () => {
    const design = handDesign()
    design.adjusters.offset!.node.nominalV = 0.25
    sized(0.15, 0.35, offsetOf(design))
  })

  test('rss: twice the root of the sum of squares, over both kinds at once', () => {
    const offset = [0, 1, 2, 3].map((i) => ({ ...offsetLine, name: `O${i}` }))
    const design = handDesign({ sizing: { combine: 'rss', margin: 0 }, budget: { gain: [gainLine], offset } })
    // 2·√(4/3) mV = 2.309 mV under the 4 mV of the worst case.
    sized(-2e-1 * Math.sqrt(4 / 3), 2e-1 * Math.sqrt(4 / 3), offsetOf(design))
  })

  test('a gain line that turns elsewhere moves offset and slope at once, fully correlated', () => {
    // Output 5 V + G·(x - 5): at x0 = 0 it adds -5·G to the offset.
    const budget = { gain: [{ ...gainLine, pivotV: 5 }], offset: [] }
    const design = handDesign({ budget })
    sized(-0.05, 0.05, offsetOf(design))
    sized(-0.1, 0.1, gainOf(design))
    // A gain adjuster that turns about the same 5 V takes it out alone: nothing is left for offset.
    const turned = handDesign({
      budget,
      adjusters: { gain: adjuster({ alpha: -5e-3, beta: 1e-3 }), offset: adjuster({ alpha: 1e-2 }) },
    })
    expect(offsetOf(turned).reachBeforeMarginV).toBeLessThan(1e-15)
    sized(-0.1, 0.1, gainOf(turned))
  })

  test('one adjuster alone nulls at its own end: gain at full scale takes the offset in too', () => {
    const design = handDesign({ adjusters: { gain: adjuster({ beta: 1e-3 }) } })
    const full = 10 - 10 / 65536
    sized(-(1e-3 + 1e-4 * full) / (1e-3 * full), (1e-3 + 1e-4 * full) / (1e-3 * full), gainOf(design))
    expect(sizeDesign(design).adjusters.offset).toBeUndefined()
  })

  test('measured units: mean ± k·s in the place of the initial lines, drift stays', () => {
    const units = [90, 100, 110].map((gainErrorPpm, i) => ({ gainErrorPpm, offsetErrorV: i * 1e-4 }))
    const design = handDesign({
      budget: { gain: [gainLine, { ...gainLine, limitPpm: 7, when: 'drift' }], offset: [] },
    })
    const { extents, adjusters } = sizeDesign(design, { measuredUnits: measuredUnits(units) })
    const k = extents.toleranceFactor!
    expect(extents.from).toBe('measured-units')
    expect(extents.gain.centrePpm).toBeCloseTo(100, 12)
    expect(extents.gain.worstCasePpm).toBeCloseTo(k * 10 + 7, 10)
    expect(extents.offset.usedV).toBeCloseTo(k * 1e-4, 15)
    sized(-0.1 - (k * 10 + 7) / 1000, -0.1 + (k * 10 + 7) / 1000, adjusters.gain!)
  })
})

describe('step and bits', () => {
  test('twice the target, shared: T/E with two adjusters, 2T/E with one', () => {
    const lsb = 10 / 65536
    expect(offsetOf(handDesign()).requiredStepV).toBeCloseTo(lsb / 1e-2, 15)
    const alone = handDesign({ adjusters: { offset: adjuster({ alpha: 1e-2 }) } })
    expect(offsetOf(alone).requiredStepV).toBeCloseTo((2 * lsb) / 1e-2, 15)
  })

  test('the effect is taken where it is largest: a bipolar gain adjuster at the far end', () => {
    const design = handDesign({ ranges: [{ id: 'r', lowV: -10, highV: 10 }] })
    expect(gainOf(design).outputPerV).toBeCloseTo(1e-2, 12)
  })

  test('a recommended part covers: the same design with it has the verdict covers', () => {
    for (const nominalV of [0, 0.3]) {
      const design = handDesign()
      design.adjusters.offset!.node.nominalV = nominalV
      const { recommended } = offsetOf(design)
      const taken = handDesign()
      taken.adjusters.offset = adjuster({ alpha: 1e-2, node: { nominalV }, source: recommended! })
      const size = offsetOf(taken)
      expect(size.verdict).toBe('covers')
      expect(size.reachMargin).toBeCloseTo(0, 9)
    }
  })

  test('over 20 bits nothing is recommended', () => {
    const design = handDesign({ target: { residual: { value: 1e-9, unit: 'V' } } })
    expect(offsetOf(design).requiredBits).toBeGreaterThan(20)
    expect(offsetOf(design).recommended).toBe(null)
  })
})

describe('against the auxiliary DAC of the design', () => {
  const withSource = (source: object, node: object = {}) =>
    handDesign({
      adjusters: { gain: adjuster({ beta: 1e-3 }), offset: adjuster({ alpha: 1e-2, source, node }) },
    })

  test('exactly enough covers, one code less is short', () => {
    // 12 bits: codes from -span/2 to span/2 - step; the high side is the tighter one.
    const enough = 0.1 * (2048 / 2047)
    const exact = offsetOf(withSource({ lowV: -enough, highV: enough }))
    expect(exact.verdict).toBe('covers')
    expect(exact.tighterSide).toBe('high')
    const step = (2 * enough) / 4096
    const less = offsetOf(withSource({ lowV: -enough, highV: enough - step }))
    expect(less.verdict).toBe('short')
    expect(less.reachMargin).toBeLessThan(0)
    expect(less.limitedBy).toBe('codes')
  })

  test('exactly the allowed step covers, a thousandth more is coarse', () => {
    const step = 10 / 65536 / 1e-2
    const at = (factor: number) =>
      offsetOf(withSource({ lowV: -step * factor * 2048, highV: step * factor * 2048 }))
    expect(at(1)).toMatchObject({ verdict: 'covers', spareBits: 0 })
    expect(at(1.001)).toMatchObject({ verdict: 'coarse', spareBits: -1 })
    expect(at(0.5)).toMatchObject({ verdict: 'covers', spareBits: 1 })
  })

  test('both', () => {
    expect(offsetOf(withSource({ bits: 2, lowV: -0.05, highV: 0.05 })).verdict).toBe('both')
  })

  test('a node limit inside the needed reach is named, at its field', () => {
    const result = sizeDesign(withSource({}, { maxV: 0.05 }))
    expect(result.adjusters.offset).toMatchObject({ verdict: 'short', limitedBy: 'node', reachMargin: -0.5 })
    expect(result.remarks.map(({ path }) => path)).toEqual(['/adjusters/offset/node/maxV'])
    expect(result.remarks[0]!.message).toContain('0.05 V')
  })

  test('the tolerance of the span comes off the reach', () => {
    const size = offsetOf(withSource({ lowV: -0.2, highV: 0.2, spanTolerance: 0.25 }))
    expect(size.available.lowV).toBeCloseTo(-0.15, 12)
  })

  test('a side without reach is short by all of it', () => {
    expect(offsetOf(withSource({ lowV: 0, highV: 1 }))).toMatchObject({
      verdict: 'short',
      reachMargin: -1,
      tighterSide: 'low',
    })
  })

  test('codes that start beyond a needed end on the far side of nominal are short', () => {
    const biased = (lowV: number) => {
      const design = withSource({ lowV, highV: 1 })
      return offsetOf({
        ...design,
        budget: { gain: [gainLine], offset: [{ ...offsetLine, nominalV: -5e-3 }] },
      })
    }
    // Needed 0.4 V to 0.6 V.
    expect(biased(0.3)).toMatchObject({ verdict: 'covers' })
    expect(biased(0.5).verdict).toBe('short')
    expect(biased(0.5).reachMargin).toBeCloseTo(-0.5, 9)
  })

  test('an auxiliary DAC that falls with its code is as good', () => {
    const falling = offsetOf(withSource({ lowV: 1, highV: -1 }))
    expect(falling.verdict).toBe('covers')
    expect(falling.available.stepV).toBeCloseTo(2 / 4096, 15)
    expect(falling.available.highV).toBe(1)
  })
})
