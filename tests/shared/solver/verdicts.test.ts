import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { studentUpper } from '../../../shared/solver/distribution/student.ts'
import { errorLine } from '../../../shared/solver/error-line.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import type { Adjuster, Design, MeasuredPoint } from '../../../shared/solver/types.ts'
import { exampleDesign, examplePoints, plainDesign, pointsOnLine } from '../../support/solver-fixtures.ts'

const codes = [0, 16384, 32768, 49152, 65535]
const calm = [0.01, -0.02, 0.01, 0.01, -0.01]
const base = plainDesign()
const LSB = 10 / 65536
const only = (which: 'gain' | 'offset', change: Partial<Adjuster> = {}): Design['adjusters'] => ({
  [which]: { ...base.adjusters[which]!, ...change },
})
const line = (offsetV: number, gain: number, design = base): MeasuredPoint[] =>
  pointsOnLine(design, codes, offsetV, gain, calm)

describe('verdicts', () => {
  test('ok: codes, words in the source’s coding, node voltages, a predicted line under the target', () => {
    const { trim } = computeCodes(base, line(2e-3, -3e-4), { applied: 'neutral' })
    expect([trim.verdict, trim.reasons, trim.shortfall]).toEqual(['ok', [], null])
    expect(trim.nodeV!.gain).toBe(-1 + (trim.codes!.gain! * 2) / 256)
    expect(trim.words!.gain).toBe(`0x${trim.codes!.gain!.toString(16).toUpperCase()}`)
    expect(trim.exactNodeV.gain).toBeCloseTo(0.15, 3)
    expect(trim.exactNodeV.offset).toBeCloseTo(-0.2, 3)
    expect(trim.reachUsed.gain).toBeCloseTo(trim.nodeV!.gain! / (127 / 128), 12)
    expect(trim.reachUsed.offset).toBeCloseTo(-trim.nodeV!.offset!, 12)
    expect(trim.predicted!.worstLsb).toBeLessThanOrEqual(1)
  })

  test('out of reach by the codes: no codes, what was wanted, the limit, and the other solved again alone', () => {
    const { trim } = computeCodes(base, line(5e-3, -2.5e-3), { applied: 'neutral' })
    expect([trim.verdict, trim.reasons]).toEqual(['out-of-reach', ['out-of-reach']])
    expect([trim.codes, trim.words, trim.nodeV, trim.predicted]).toEqual([null, null, null, null])
    expect(trim.shortfall!.gain).toEqual({
      wantedV: trim.exactNodeV.gain,
      limitV: 127 / 128,
      by: 'codes',
      nearestCode: 255,
    })
    expect(trim.shortfall!.offset).toBe(undefined)
    // Gain stands at its limit; offset nulls the error at 0 V; the rest stands at full scale.
    const left = Math.abs(-2.5e-3 + 0.002 * (127 / 128)) * (10 - LSB)
    expect(trim.shortfall!.remainingWorstV).toBeCloseTo(left, 5)
    expect(trim.reachUsed.gain).toBeCloseTo(trim.exactNodeV.gain! / (127 / 128), 12)
  })

  test('out of reach by the node: the limit of the node is named', () => {
    const limited = plainDesign({
      adjusters: {
        ...base.adjusters,
        gain: { ...base.adjusters.gain!, node: { nominalV: 0, minV: -0.1, maxV: 0.1 } },
      },
    })
    const { trim } = computeCodes(limited, line(0, -3e-4), { applied: 'neutral' })
    expect(trim.shortfall!.gain).toMatchObject({ limitV: 0.1, by: 'node', nearestCode: 140 })
    expect(
      computeCodes(limited, line(0, -1.9e-4), { applied: 'neutral' }).trim.codes!.gain,
    ).toBeLessThanOrEqual(140)
  })

  test('half a step beyond the last code is still in reach; a hair more is not', () => {
    const step = 2 / 256
    const at = (v: number) => {
      const design = plainDesign({ adjusters: only('gain'), targetLsb: 1e6 })
      const gain = -0.002 * v
      return computeCodes(design, pointsOnLine(design, [0, 65535], 0, gain), { applied: 'neutral' }).trim
    }
    expect(at(127 / 128 + 0.49 * step).codes).toEqual({ gain: 255 })
    expect(at(127 / 128 + 0.51 * step).codes).toBe(null)
    expect(at(-1 - 0.49 * step).codes).toEqual({ gain: 0 })
    expect(at(-1 - 0.51 * step).codes).toBe(null)
  })

  test('a node window between two codes leaves no code: out of reach, never a clipped one', () => {
    const node = { nominalV: 0.004, minV: 0.003, maxV: 0.005 }
    const design = plainDesign({ adjusters: { ...base.adjusters, gain: { ...base.adjusters.gain!, node } } })
    const { trim } = computeCodes(design, line(0, 0), { applied: 'neutral' })
    expect(trim.verdict).toBe('out-of-reach')
    expect(trim.shortfall!.gain).toMatchObject({ by: 'node', nearestCode: null })
  })

  test('too coarse: in reach, but the step leaves more than the target', () => {
    const coarse = plainDesign({
      targetLsb: 0.05,
      adjusters: {
        gain: base.adjusters.gain!,
        offset: {
          ...base.adjusters.offset!,
          source: { bits: 4, coding: 'straight-binary', lowV: -1, highV: 1 },
        },
      },
    })
    const { trim } = computeCodes(coarse, line(0.4e-3, 0), { applied: 'neutral' })
    expect([trim.verdict, trim.reasons]).toEqual(['too-coarse', ['too-coarse']])
    expect(trim.codes).not.toBe(null)
  })

  test('one adjuster: gain nulls at full scale, offset at 0 V; what it cannot reach is said when it passes the target', () => {
    const gainOnly = plainDesign({ adjusters: only('gain') })
    const g = computeCodes(gainOnly, line(2e-3, -3e-4), { applied: 'neutral' })
    const at = (fit: typeof g.fit, z: number) => fit.offsetErrorV + (fit.gainErrorPpm / 1e6) * z
    expect(g.trim.exactNodeV).toEqual({
      gain: expect.closeTo(-at(g.fit, 10 - LSB) / (0.002 * (10 - LSB)), 10),
    })
    expect(g.trim.reasons).toEqual(['too-coarse', 'no-offset-adjuster'])
    const offsetOnly = plainDesign({ adjusters: only('offset') })
    const o = computeCodes(offsetOnly, line(2e-3, -3e-4), { applied: 'neutral' })
    expect(o.trim.exactNodeV).toEqual({ offset: expect.closeTo(-o.fit.offsetErrorV / 0.01, 10) })
    expect(o.trim.reasons).toEqual(['too-coarse', 'no-gain-adjuster'])
    expect(Object.keys(o.trim.effects)).toEqual(['offset'])
    expect(computeCodes(offsetOnly, line(2e-3, 0), { applied: 'neutral' }).trim.reasons).not.toContain(
      'no-gain-adjuster',
    )
  })

  test('suspect goes before too coarse and after out of reach; reasons list all', () => {
    const wrong = (offsetV: number, gain: number) => {
      const many = [0, 9000, 18000, 27000, 36000, 45000, 54000, 65535]
      return pointsOnLine(base, many, offsetV, gain, [0, 0, 0, 6, 0, 0, 0, 0])
    }
    const tight = plainDesign({ targetLsb: 0.001 })
    expect(computeCodes(tight, wrong(1e-3, 1e-4)).trim).toMatchObject({
      verdict: 'suspect',
      reasons: ['suspect', 'too-coarse'],
    })
    expect(computeCodes(tight, wrong(1e-3, 5e-3)).trim).toMatchObject({
      verdict: 'out-of-reach',
      reasons: ['out-of-reach', 'suspect'],
    })
  })
})

describe('applied codes and notes', () => {
  test('a second pass starts from the voltages of the applied codes', () => {
    const applied = { gain: 147, offset: 102 }
    const { trim } = computeCodes(base, line(1e-4, -2e-5), { applied })
    expect(trim.appliedNodeV).toEqual({ gain: -1 + 147 / 128, offset: -1 + 102 / 128 })
    expect(trim.exactNodeV.gain! - trim.appliedNodeV.gain!).toBeCloseTo(0.01, 3)
    expect(trim.notes).not.toContain('assumed-neutral')
  })

  test('nothing said is neutral and noted; a code that is given counts exactly, beside nominal too', () => {
    const points = line(1e-4, -2e-5)
    const unsaid = computeCodes(base, points).trim
    expect(unsaid.notes).toContain('assumed-neutral')
    expect(unsaid.appliedNodeV).toEqual({ gain: 0, offset: 0 })
    const off = plainDesign({
      adjusters: { ...base.adjusters, gain: { ...base.adjusters.gain!, node: { nominalV: 0.003 } } },
    })
    expect(computeCodes(off, points, { applied: { gain: 128, offset: 0 } }).trim.appliedNodeV.gain).toBe(0)
    expect(computeCodes(off, points, { applied: { gain: 129, offset: 0 } }).trim.appliedNodeV.gain).toBe(
      1 / 128,
    )
    expect(computeCodes(base, points, { applied: { gain: 128 } }).trim.notes).toContain('assumed-neutral')
  })

  test('codes that the design does not have are refused with their place', () => {
    const points = line(0, 0)
    expect(() => computeCodes(base, points, { applied: { gain: 256 } })).toThrow('the highest is 255')
    expect(() =>
      computeCodes(plainDesign({ adjusters: only('gain') }), points, { applied: { offset: 1 } }),
    ).toThrow('no offset adjuster')
  })

  test('effects known to ±τ: effectV is the larger end of Στ|ΔV||α + βz|, and verify-after-loading follows from it', () => {
    const { trim } = computeCodes(base, line(2e-3, -3e-4), { applied: 'neutral' })
    const { gain, offset } = trim.nodeV!
    const full = 0.2 * Math.abs(gain! * 0.002 * (10 - LSB)) + 0.2 * Math.abs(offset! * 0.01)
    expect(trim.predicted!.effectV).toBeCloseTo(full, 12)
    expect(trim.notes).toEqual(['verify-after-loading'])
    // u² = u²(e at x) + Σ(τ·|ΔV|·|α + βz|)²/3, k by Welch-Satterthwaite with the fit's three degrees of freedom.
    const points = line(2e-3, -3e-4)
    const result = fitPoints(base, points)
    const { atV, expandedUncertaintyV } = trim.predicted!
    const own = errorLine(base, result).standardUncertaintyAt(atV)!
    const added = [0.2 * offset! * 0.01, 0.2 * gain! * 0.002 * atV].reduce((sum, v) => sum + v ** 2 / 3, 0)
    const u = Math.sqrt(own ** 2 + added)
    expect(expandedUncertaintyV).toBeCloseTo(u * studentUpper(0.025, 3 * (u / own) ** 4), 12)
    const exact = plainDesign({
      adjusters: {
        gain: { ...base.adjusters.gain!, effectTolerance: 0 },
        offset: { ...base.adjusters.offset!, effectTolerance: 0 },
      },
    })
    const sure = computeCodes(exact, line(2e-3, -3e-4), { applied: 'neutral' }).trim
    expect(sure.notes).toEqual([])
    expect(sure.predicted!.effectV).toBe(0)
    expect(sure.predicted!.expandedUncertaintyV).toBeLessThan(trim.predicted!.expandedUncertaintyV!)
  })

  test('a span tolerance takes from the reach', () => {
    const loose = plainDesign({
      adjusters: {
        ...base.adjusters,
        gain: { ...base.adjusters.gain!, source: { ...base.adjusters.gain!.source, spanTolerance: 0.1 } },
      },
    })
    const used = (design: Design) =>
      computeCodes(design, line(2e-3, -3e-4), { applied: 'neutral' }).trim.reachUsed.gain!
    expect(used(loose)).toBeCloseTo(used(base) / 0.9, 12)
  })

  test('ranges that keep these codes: the change is reported, and the predicted line where they were measured', () => {
    const shared: Design = {
      ...base,
      ranges: [
        { id: 'a', lowV: 0, highV: 10, sharedWith: ['b'] },
        {
          id: 'b',
          lowV: 0,
          highV: 5,
          effects: { offset: { kind: 'measured', slopePerV: 0, offsetPerV: 0.005 } },
        },
      ],
    }
    const points = line(2e-3, -3e-4)
    const bare = computeCodes(shared, points, { rangeId: 'a', applied: 'neutral' }).trim
    expect(bare.shared).toEqual([
      {
        range: 'b',
        change: {
          offsetErrorV: expect.closeTo(bare.nodeV!.offset! * 0.005, 12),
          gainErrorPpm: expect.closeTo(bare.nodeV!.gain! * 2000, 9),
        },
        predicted: null,
      },
    ])
    const other = codes.map((code) => ({ code, measured: (code * 5) / 65536 + 1e-3 }))
    const both = computeCodes(shared, points, {
      rangeId: 'a',
      applied: 'neutral',
      sharedPoints: { b: other },
    }).trim
    expect(both.shared![0]!.predicted!.offsetErrorV).toBeCloseTo(1e-3 + bare.nodeV!.offset! * 0.005, 9)
    expect(both.codes).toEqual(bare.codes)
  })
})

describe('worst of the predicted line', () => {
  test('stands at the end with the larger error, the low end of two equal ones', () => {
    const { trim } = computeCodes(exampleDesign('bipolar-16'), examplePoints('bipolar-16'), {
      applied: 'neutral',
    })
    const { offsetErrorV, gainErrorPpm, worstV, worstLsb, worstPpm, atV } = trim.predicted!
    const low = offsetErrorV + (gainErrorPpm / 1e6) * -10
    const full = offsetErrorV + (gainErrorPpm / 1e6) * (10 - 20 / 65536)
    expect(worstV).toBeCloseTo(Math.max(Math.abs(low), Math.abs(full)), 12)
    expect(atV).toBe(Math.abs(low) >= Math.abs(full) ? -10 : 10 - 20 / 65536)
    expect(worstLsb).toBe(worstV / (20 / 65536))
    expect(worstPpm).toBeCloseTo((worstV / 20) * 1e6, 9)
  })
})
