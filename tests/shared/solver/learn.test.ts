import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import type { CodesResult } from '../../../shared/solver/types.ts'
import { plainDesign, pointsOnLine } from '../../support/solver-fixtures.ts'

const design = plainDesign()
const codes = [0, 16384, 32768, 49152, 65535]
const calm = [0.01, -0.02, 0.01, 0.01, -0.01]

/** Two passes on a unit whose adjusters really act `gainFactor` and `offsetFactor` times as the design says. */
function twoPasses(
  gainFactor: number,
  offsetFactor: number,
  noise = 1,
  d = design,
): [CodesResult, CodesResult] {
  const scatter = calm.map((v) => v * noise)
  const [o, g] = [4e-3, -6e-4]
  const first = computeCodes(d, pointsOnLine(d, codes, o, g, scatter), { applied: 'neutral' })
  const { gain = 0, offset = 0 } = first.trim.nodeV!
  const left = pointsOnLine(
    d,
    codes,
    o + 0.01 * offsetFactor * offset,
    g + 0.002 * gainFactor * gain,
    scatter.map((v, i) => (i % 2 ? v : -v)),
  )
  const second = computeCodes(d, left, { applied: first.trim.codes!, learned: first })
  return [first, second]
}

describe('effects learned from a move (secant)', () => {
  test('factors are what the fits saw over what was moved; tolerance becomes 2u(f)/f', () => {
    const [, { trim }] = twoPasses(1.1, 0.9)
    const { gain, offset } = trim.effects
    expect(gain!.factor).toBeCloseTo(1.1, 2)
    expect(offset!.factor).toBeCloseTo(0.9, 2)
    expect(gain).toMatchObject({ source: 'learned', why: null, slopePerV: 0.002 * gain!.factor })
    expect(offset!.offsetPerV).toBe(0.01 * offset!.factor)
    expect(gain!.tolerance).toBeLessThan(0.02)
    expect(gain!.tolerance).toBeGreaterThan(0)
  })

  test('with learned effects the second pass lands closer than with the design’s', () => {
    const remaining = (learned: boolean) => {
      const [first, second] = twoPasses(1.15, 0.85)
      const trim = learned ? second.trim : computeCodes(design, [], { applied: 'neutral' }).trim
      const dv = trim.nodeV!.gain! - first.trim.nodeV!.gain!
      return Math.abs(second.fit.gainErrorPpm / 1e6 + 0.002 * 1.15 * dv)
    }
    const [first, second] = twoPasses(1.15, 0.85)
    const points = second.fit.residuals.map(({ code, measuredV }) => ({ code, measured: measuredV }))
    const plain = computeCodes(design, points, { applied: first.trim.codes! })
    const dv = plain.trim.nodeV!.gain! - first.trim.nodeV!.gain!
    const withDesign = Math.abs(second.fit.gainErrorPpm / 1e6 + 0.002 * 1.15 * dv)
    expect(remaining(true)).toBeLessThanOrEqual(withDesign)
    expect(Math.abs(second.trim.exactNodeV.gain! - plain.trim.exactNodeV.gain!)).toBeGreaterThan(1e-3)
  })

  test('u(f)² = Σ M⁻¹_ij M⁻¹_ik cov_jk/ΔV², cov the sum of both fits’; the instrument cancels', () => {
    const [first, second] = twoPasses(1.05, 1)
    const moved = first.trim.nodeV!.gain!
    const sum =
      (first.fit.standardUncertainty!.gainPpm ** 2 + second.fit.standardUncertainty!.gainPpm ** 2) / 1e12
    const u = Math.sqrt(sum) / 0.002 / Math.abs(moved)
    expect(second.trim.effects.gain!.tolerance).toBeCloseTo((2 * u) / second.trim.effects.gain!.factor, 9)
    const metered = twoPasses(
      1.05,
      1,
      1,
      plainDesign({ measurement: { instrument: { gainPpm: 5, offsetV: 1e-5 } } }),
    )
    expect(metered[1].trim.effects.gain!.tolerance).toBeCloseTo(second.trim.effects.gain!.tolerance, 8)
    expect(metered[1].trim.effects.offset!.tolerance).toBeCloseTo(second.trim.effects.offset!.tolerance, 8)
  })

  test('two different instruments have nothing in common: both their parts stay', () => {
    const meter = (id: string) => ({ id, gainPpm: 3, offsetV: 2e-6 })
    const points = pointsOnLine(design, codes, 4e-3, -6e-4, calm)
    const first = computeCodes(design, points, { applied: 'neutral', instrument: meter('A') })
    const { gain: movedG = 0, offset: movedO = 0 } = first.trim.nodeV!
    const left = pointsOnLine(design, codes, 4e-3 + 0.01 * movedO, -6e-4 + 0.0021 * movedG, calm)
    const effectWith = (id: string) => {
      const options = { applied: first.trim.codes!, learned: first, instrument: meter(id) }
      return computeCodes(design, left, options).trim.effects.gain!
    }
    const [known, other] = [effectWith('A'), effectWith('B')]
    expect(other.factor).toBe(known.factor)
    // Tolerance is 2u(f)/f; u² grows by the limit/√3 of both meters, in what the move shows of the gain.
    const u = ({ tolerance, factor }: typeof known) => (tolerance * factor) / 2
    const added = (2 * 3e-6 ** 2) / 3 / (0.002 * movedG) ** 2
    expect((u(other) ** 2 - u(known) ** 2) / added).toBeCloseTo(1, 6)
  })

  test('a factor outside its tolerance is flagged effect-off and not used', () => {
    const [, second] = twoPasses(1.6, 1)
    expect(second.trim.effects.gain).toMatchObject({
      source: 'design',
      factor: 1,
      why: 'effect-off',
      slopePerV: 0.002,
    })
    const flag = second.fit.flags.find(({ flag }) => flag === 'effect-off')
    expect(flag!.value).toBeCloseTo(1.6, 2)
    expect(flag!.limit).toBe(1.2)
  })

  test('nothing is learned without a move, without uncertainty, or from too uncertain fits', () => {
    const points = pointsOnLine(design, codes, 1e-3, 1e-4, calm)
    const first = computeCodes(design, points, { applied: 'neutral' })
    const still = computeCodes(design, points, { applied: 'neutral', learned: first })
    expect(still.trim.effects.gain).toMatchObject({ why: 'not-moved', source: 'design' })
    const bare = { ...first, fit: { ...first.fit, standardUncertainty: null } }
    const blind = computeCodes(design, points, { applied: first.trim.codes!, learned: bare })
    expect(blind.trim.effects.offset!.why).toBe('no-uncertainty')
    const [, noisy] = twoPasses(1.1, 0.9, 2000)
    expect(noisy.trim.effects.gain!.why).toBe('too-uncertain')
  })

  test('adjusters that each move both offset and slope are told apart: true effects give factors of one', () => {
    const effect = (slopePerV: number, offsetPerV: number) =>
      ({ kind: 'measured', slopePerV, offsetPerV }) as const
    const coupled = plainDesign({
      adjusters: {
        gain: { ...design.adjusters.gain!, effect: effect(0.002, 0.003) },
        offset: { ...design.adjusters.offset!, effect: effect(0.0004, 0.01) },
      },
    })
    const first = computeCodes(coupled, pointsOnLine(coupled, codes, 4e-3, -6e-4), { applied: 'neutral' })
    const { gain = 0, offset = 0 } = first.trim.nodeV!
    const left = pointsOnLine(
      coupled,
      codes,
      4e-3 + 0.01 * offset + 0.003 * 1.1 * gain,
      -6e-4 + 0.0004 * offset + 0.002 * 1.1 * gain,
      calm,
    )
    const before = {
      ...first,
      fit: { ...first.fit, standardUncertainty: { offsetV: 1e-7, gainPpm: 0.01, covarianceVPpm: 0 } },
    }
    const { effects } = computeCodes(coupled, left, { applied: first.trim.codes!, learned: before }).trim
    expect(effects.gain!.factor).toBeCloseTo(1.1, 3)
    expect(effects.offset!.factor).toBeCloseTo(1, 3)
  })

  test('one adjuster alone learns from the error where it nulls', () => {
    const lone = plainDesign({ adjusters: { gain: design.adjusters.gain } })
    const first = computeCodes(lone, pointsOnLine(lone, codes, 0, -6e-4, calm), { applied: 'neutral' })
    const moved = first.trim.nodeV!.gain!
    const next = pointsOnLine(lone, codes, 0, -6e-4 + 0.002 * 1.1 * moved, calm)
    const { trim } = computeCodes(lone, next, { applied: first.trim.codes!, learned: first })
    expect(trim.effects.gain!.factor).toBeCloseTo(1.1, 4)
  })
})
