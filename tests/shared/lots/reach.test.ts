import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { barsOf } from '../../../shared/solver/lots/histogram.ts'
import { reachLimits, shareOfReach, worstReach } from '../../../shared/solver/lots/reach-limits.ts'
import { prepareTrim } from '../../../shared/solver/prepare-trim.ts'
import { runSeed, seededRandom } from '../../support/random.ts'
import { exampleDesign, examplePoints } from '../../support/solver-fixtures.ts'

describe.each(['unipolar-18', 'bipolar-16'] as const)('%s', (name) => {
  const design = exampleDesign(name)
  const trim = prepareTrim(design)
  const { gain, offset } = trim.trimmers

  test('an error just inside the limits gets codes, one just outside is out of reach', () => {
    for (const which of ['gain', 'offset'] as const) {
      const limits = reachLimits(trim.trimmers[which]!, 1)
      for (const end of [limits.low, limits.high]) {
        const verdictOf = (share: number) => {
          const line = which === 'gain' ? { o: 0, g: end * share } : { o: end * share, g: 0 }
          const { range } = trim.channel
          const points = examplePoints(name).map(({ code = 0 }) => {
            const x = range.lowV + code * range.lsbV
            return { code, measured: x + line.o + line.g * (x - range.x0) }
          })
          return computeCodes(design, points).trim.verdict
        }
        expect(verdictOf(0.999), `${which} ${end}`).not.toBe('out-of-reach')
        expect(verdictOf(1.01), `${which} ${end}`).toBe('out-of-reach')
      }
    }
  })

  test('the worst reach is the reach less the tolerance of the effect', () => {
    expect(worstReach(gain!).high).toBeCloseTo(reachLimits(gain!, 1).high * (1 - gain!.tolerance), 15)
    expect(worstReach(offset!).low).toBeCloseTo(reachLimits(offset!, 1).low * (1 - offset!.tolerance), 15)
  })

  test('the share of reach is the one that the trim itself reports', () => {
    const { fit, trim: made } = computeCodes(design, examplePoints(name))
    const line = { offset: fit.offsetErrorV, gain: fit.gainErrorPpm / 1e6 }
    const share = shareOfReach(trim, made.codes, line)
    expect(share.gain).toBe(made.reachUsed.gain)
    expect(share.offset).toBe(made.reachUsed.offset)
  })
})

test('out of reach, the share is over one and the one that the trim reports', () => {
  const design = exampleDesign('out-of-reach')
  const { fit, trim: made } = computeCodes(design, examplePoints('out-of-reach'))
  const share = shareOfReach(prepareTrim(design), null, {
    offset: fit.offsetErrorV,
    gain: fit.gainErrorPpm / 1e6,
  })
  expect(made.codes).toBeNull()
  expect(share.gain! > 1 || share.offset! > 1).toBe(true)
  for (const which of ['gain', 'offset'] as const) {
    if (made.reachUsed[which] === undefined) expect(share[which]).toBeNull()
    else expect(share[which]).toBeCloseTo(made.reachUsed[which]!, 9)
  }
})

test('bars hold every value once and are few', () => {
  const seed = runSeed()
  const random = seededRandom(seed).next
  for (let run = 0; run < 200; run++) {
    const scale = [1e-9, 1e-3, 1, 5e4][run % 4]!
    const values = Array.from({ length: 1 + (run % 57) }, () => (random() - 0.3) * scale)
    const bars = barsOf(values, 30)!
    expect(
      bars.counts.reduce((sum, count) => sum + count, 0),
      `seed ${seed}`,
    ).toBe(values.length)
    expect(bars.counts.length).toBeLessThanOrEqual(32)
    expect(bars.counts[0]).toBeGreaterThan(0)
    expect(bars.counts.at(-1)).toBeGreaterThan(0)
  }
  expect(barsOf([0, 0, 0], 10)?.counts).toEqual([3])
  expect(barsOf([], 10)).toBeNull()
})
