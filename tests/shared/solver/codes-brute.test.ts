import fc from 'fast-check'
import { lusolve, type Matrix, matrix } from 'mathjs'
import { describe, expect, test } from 'vitest'
import { prepareTrimmer, type Trimmer } from '../../../shared/solver/adjuster.ts'
import { prepareChannel } from '../../../shared/solver/channel.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { jointCodes, nearestTrimCode } from '../../../shared/solver/joint-codes.ts'
import type { Adjuster, Design } from '../../../shared/solver/types.ts'
import { plainDesign, pointsOnLine } from '../../support/solver-fixtures.ts'

/** The search for codes against trying every pair. */
type Drawn = {
  lowV: number
  offsetLsb: number
  gainPpm: number
  gain: { slope: number; cross: number; bits: number; low: number; high: number }
  offset: { perV: number; cross: number; bits: number; low: number; high: number }
  target: number
}

const end = fc.integer({ min: 3, max: 20 }).map((v) => v / 10)
const drawn: fc.Arbitrary<Drawn> = fc.record({
  lowV: fc.constantFrom(-10, 0),
  offsetLsb: fc.integer({ min: -300, max: 300 }).map((v) => v / 10),
  gainPpm: fc.integer({ min: -4000, max: 4000 }).map((v) => v / 10),
  gain: fc.record({
    slope: fc.constantFrom(0.002, -0.0011, 0.0007),
    cross: fc.constantFrom(0, 0, 0.004, -0.003),
    bits: fc.integer({ min: 2, max: 6 }),
    low: end.map((v) => -v),
    high: end,
  }),
  offset: fc.record({
    perV: fc.constantFrom(0.01, -0.02),
    cross: fc.constantFrom(0, 0, 0.0004, -0.0003),
    bits: fc.integer({ min: 2, max: 6 }),
    low: end,
    high: end.map((v) => -v),
  }),
  target: fc.constantFrom(0.5, 50),
})

function adjuster(
  slopePerV: number,
  offsetPerV: number,
  bits: number,
  lowV: number,
  highV: number,
): Adjuster {
  return {
    effect: { kind: 'measured', slopePerV, offsetPerV },
    effectTolerance: 0.1,
    node: { nominalV: 0 },
    source: { bits, coding: 'straight-binary', lowV, highV },
    network: { kind: 'direct' },
  }
}

function designOf(d: Drawn): Design {
  return plainDesign({
    lowV: d.lowV,
    highV: 10,
    targetLsb: d.target,
    adjusters: {
      gain: adjuster(d.gain.slope, d.gain.cross, d.gain.bits, d.gain.low, d.gain.high),
      offset: adjuster(d.offset.cross, d.offset.perV, d.offset.bits, d.offset.low, d.offset.high),
    },
  })
}

/** Errors at both ends for a pair of codes, larger first. */
function endsOf(
  design: Design,
  o: number,
  g: number,
  codes: { gain: number; offset: number },
): [number, number] {
  const { lowV, highV } = design.ranges[0]!
  const lsb = (highV - lowV) / 2 ** design.converter.bits
  const sizes = [lowV, highV - lsb].map((x) => {
    let e = o + g * x
    for (const which of ['gain', 'offset'] as const) {
      const { effect, source } = design.adjusters[which]!
      if (effect.kind !== 'measured') throw new Error('measured effects only')
      const v = source.lowV + (codes[which] * (source.highV - source.lowV)) / 2 ** source.bits
      e += v * (effect.offsetPerV + effect.slopePerV * x)
    }
    return Math.abs(e)
  })
  return [Math.max(...sizes), Math.min(...sizes)]
}

/** The best larger end over all pairs, next to that of the pair given. */
function search(d: Drawn) {
  const { design, trim, o, g } = solve(d)
  if (trim.codes === null) return null
  const [larger] = endsOf(design, o, g, { gain: trim.codes.gain!, offset: trim.codes.offset! })
  let best = Number.POSITIVE_INFINITY
  for (let gain = 0; gain < 2 ** d.gain.bits; gain++)
    for (let offset = 0; offset < 2 ** d.offset.bits; offset++)
      best = Math.min(best, endsOf(design, o, g, { gain, offset })[0])
  expect(trim.predicted!.worstV).toBeCloseTo(larger, 12)
  return { best, larger, lsb: (10 - d.lowV) / 65536 }
}

const tieDraw: Drawn = {
  lowV: 0,
  offsetLsb: 0,
  gainPpm: 0,
  gain: { slope: 0.002, cross: 0, bits: 4, low: -1, high: 1 },
  offset: { perV: 0.01, cross: 0, bits: 4, low: 1, high: -1 },
  target: 1,
}

function solve(d: Drawn) {
  const design = designOf(d)
  const lsb = (10 - d.lowV) / 65536
  const o = d.offsetLsb * lsb
  const g = d.gainPpm / 1e6
  // pointsOnLine counts from the low end; offset is read at 0 V here.
  const points = pointsOnLine(design, [0, 65535], o + g * d.lowV, g)
  const result = computeCodes(design, points, { applied: 'neutral' })
  const { offsetErrorV, gainErrorPpm } = result.fit
  return { design, trim: result.trim, o: offsetErrorV, g: gainErrorPpm / 1e6 }
}

describe('joint codes', () => {
  test('no pair at all is better, over the whole of small DACs, cross-coupled or not', () => {
    let given = 0
    fc.assert(
      fc.property(drawn, (d) => {
        const found = search(d)
        if (found === null) return
        given += 1
        // A billionth of an LSB for the different order of the sums.
        expect(found.best).toBeGreaterThan(found.larger - 1e-9 * found.lsb)
      }),
      { numRuns: 1000 },
    )
    expect(given).toBeGreaterThan(400)
  })

  test('with 12-bit DACs no pair in a window of ±12 codes is better', () => {
    fc.assert(
      fc.property(drawn, (small) => {
        const d = { ...small, gain: { ...small.gain, bits: 12 }, offset: { ...small.offset, bits: 12 } }
        const { design, trim, o, g } = solve(d)
        if (trim.codes === null) return
        const at = { gain: trim.codes.gain!, offset: trim.codes.offset! }
        const [larger] = endsOf(design, o, g, at)
        const slack = (1e-9 * (10 - d.lowV)) / 65536
        for (let dg = -12; dg <= 12; dg++)
          for (let dk = -12; dk <= 12; dk++) {
            const pair = { gain: at.gain + dg, offset: at.offset + dk }
            expect(endsOf(design, o, g, pair)[0] > larger - slack).toBe(true)
          }
      }),
      { numRuns: 200 },
    )
  })

  test('ties in exact binary numbers: the smaller second end, then the lower gain code, then the lower offset code', () => {
    const trimmer = (which: 'gain' | 'offset', low: number, full: number): Trimmer => ({
      ...prepareTrimmer(prepareChannel(designOf(tieDraw)), which)!,
      v0: -2,
      stepV: 1,
      firstCode: 0,
      lastCode: 4,
      endLow: low,
      endFull: full,
    })
    const pick = (
      gain: Trimmer,
      offset: Trimmer,
      errorLow: number,
      errorFull: number,
      g: number,
      o: number,
    ) => jointCodes(gain, offset, { errorLow, errorFull, gainV: 0, offsetV: 0 }, g, o)
    // Offset moves the low end only, gain full scale only: offset codes 2 and 3 leave half a step, gain has its own zero.
    expect(pick(trimmer('gain', 0, 1), trimmer('offset', 1, 0), -0.5, 0, 0, 0.5)).toEqual({
      gain: 2,
      offset: 2,
    })
    // Both ends tie: the lower gain code goes before the lower offset code.
    expect(pick(trimmer('gain', 0, 1), trimmer('offset', 1, 0), -0.5, -0.5, 0.5, 0.5)).toEqual({
      gain: 2,
      offset: 2,
    })
    // Offset moves both ends alike: code 3 leaves (1/2, 1/4) where code 2 leaves (1/2, 3/4) and is worse.
    expect(pick(trimmer('gain', 0, 8), trimmer('offset', 1, 1), -0.5, -0.75, 0, 0.5)).toEqual({
      gain: 2,
      offset: 3,
    })
    // The larger end ties at a half for both offset codes; the smaller end decides for code 3.
    expect(pick(trimmer('gain', 0, 8), trimmer('offset', 1, 0.25), -0.5, -0.25, 0, 0.5)).toEqual({
      gain: 2,
      offset: 3,
    })
    // Gain codes 2 and 3 are equal at both ends while offset has only one good code: the lower gain code.
    expect(pick(trimmer('gain', 1, 0), trimmer('offset', 0, 1), -0.5, 0, 0.5, 0)).toEqual({
      gain: 2,
      offset: 2,
    })
  })

  test('where the best offset lies beyond its last code, the last code is taken: no neighbour is better', () => {
    // A gain step of 14 mV at full scale wants more offset than there is to split it.
    const d = {
      ...tieDraw,
      offsetLsb: 6.6,
      gain: { slope: 0.002, cross: 0, bits: 2, low: -1.8, high: 1 },
      offset: { perV: 0.01, cross: 0, bits: 3, low: 0.3, high: -0.4 },
    }
    expect(solve(d).trim.codes).toEqual({ gain: 3, offset: 7 })
  })

  test('a lone adjuster takes the nearest code, ties to the smaller one', () => {
    const gain = {
      ...prepareTrimmer(prepareChannel(designOf(tieDraw)), 'gain')!,
      v0: 0,
      stepV: 1,
      firstCode: 0,
      lastCode: 9,
    }
    expect([3.4, 3.5, 3.51, 4.5].map((v) => nearestTrimCode(gain, v))).toEqual([3, 3, 4, 4])
    expect([-0.5, 9.5, 11.1, -2.1].map((v) => nearestTrimCode(gain, v))).toEqual([0, 9, null, null])
    const falling = { ...gain, v0: 9, stepV: -1 }
    expect([3.5, 3.4].map((v) => nearestTrimCode(falling, v))).toEqual([5, 6])
  })

  test('out of reach exactly when an exact voltage lies over half a step outside the codes', () => {
    fc.assert(
      fc.property(drawn, (d) => {
        const { design, trim } = solve(d)
        const outside = (['gain', 'offset'] as const).filter((which) => {
          const { source } = design.adjusters[which]!
          const k =
            (trim.exactNodeV[which]! - source.lowV) / ((source.highV - source.lowV) / 2 ** source.bits)
          return k < -0.5 || k > 2 ** source.bits - 0.5
        })
        expect(trim.verdict === 'out-of-reach').toBe(outside.length > 0)
        expect(Object.keys(trim.shortfall ?? {}).filter((key) => key !== 'remainingWorstV')).toEqual(outside)
      }),
    )
  })

  test('applying the codes and measuring again gives the predicted line, and the same codes', () => {
    fc.assert(
      fc.property(drawn, (d) => {
        const { design, trim } = solve(d)
        if (trim.codes === null) return
        const { offsetErrorV, gainErrorPpm } = trim.predicted!
        const points = pointsOnLine(
          design,
          [0, 65535],
          offsetErrorV + (gainErrorPpm / 1e6) * d.lowV,
          gainErrorPpm / 1e6,
        )
        const again = computeCodes(design, points, { applied: trim.codes }).trim
        // Neutral stands for a code within half a step of nominal, so such a code is not told apart from nominal.
        const moved = Object.values(again.appliedNodeV).every((v, i) => v === Object.values(trim.nodeV!)[i])
        if (moved) expect(again.predicted!.worstV).toBeCloseTo(trim.predicted!.worstV, 9)
      }),
    )
  })

  test('exact node voltages are what mathjs solves M·ΔV = -[O; G] for', () => {
    fc.assert(
      fc.property(drawn, (d) => {
        const { trim, o, g } = solve(d)
        // Scaled rows, so that volts and ratios weigh alike in mathjs's pivoting.
        const m = matrix([
          [d.offset.perV, d.gain.cross],
          [d.offset.cross * 10, d.gain.slope * 10],
        ])
        const moves = lusolve(m, matrix([[-o], [-g * 10]])) as Matrix
        expect(trim.exactNodeV.offset).toBeCloseTo(moves.get([0, 0]) as number, 9)
        expect(trim.exactNodeV.gain).toBeCloseTo(moves.get([1, 0]) as number, 9)
      }),
    )
  })
})
