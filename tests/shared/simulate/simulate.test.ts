import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { parsePointsCsv } from '../../../shared/points/parse-csv.ts'
import { simulatedHeader, simulatedRows } from '../../../shared/simulate/csv.ts'
import { simulateUnit } from '../../../shared/simulate/unit.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import { type Distribution, draw } from '../../../shared/solver/random/draw.ts'
import { randomStream } from '../../../shared/solver/random/generator.ts'

const document = JSON.parse(
  readFileSync(join(import.meta.dirname, '../../vectors/examples/unipolar-18.design.json'), 'utf8'),
) as Record<string, unknown>
const design = designDocument.parse(document)
const designWith = (change: object) => designDocument.parse({ ...document, ...change })

describe('random numbers', () => {
  test('lie in [0, 1), evenly, and differ from stream to stream', () => {
    const random = randomStream(7, 3)
    const values = Array.from({ length: 100_000 }, random)
    expect(values.every((value) => value >= 0 && value < 1)).toBe(true)
    const tenths = new Array<number>(10).fill(0)
    for (const value of values) tenths[Math.floor(value * 10)]! += 1
    // 10 000 expected in each, standard deviation 95.
    for (const count of tenths) expect(Math.abs(count - 10_000)).toBeLessThan(500)
    const firsts = new Set(Array.from({ length: 10_000 }, (_, stream) => randomStream(7, stream)()))
    expect(firsts.size).toBe(10_000)
    expect(randomStream(8, 3)()).not.toBe(randomStream(7, 3)())
    expect(randomStream(7 + 2 ** 32, 3)()).not.toBe(randomStream(7, 3)())
  })

  test('are the same on every machine: frozen values', () => {
    const random = randomStream(1, 0)
    expect([random(), random(), random()]).toMatchInlineSnapshot(`
      [
        0.8965214247662014,
        0.4039775870248682,
        0.316194877246435,
      ]
    `)
  })

  test.each<[Distribution, number]>([
    ['rectangular', 1 / Math.sqrt(3)],
    ['triangular', 1 / Math.sqrt(6)],
    ['arcsine', 1 / Math.sqrt(2)],
    ['normal', 1 / 2],
  ])('%s: mean 0 and the standard deviation that budgets reckon with', (distribution, sigma) => {
    const random = randomStream(11, 0)
    const values = Array.from({ length: 200_000 }, () => draw(random, { distribution, k: 2 }, 1))
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length
    const variance = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length
    expect(Math.abs(mean)).toBeLessThan(0.01)
    expect(Math.abs(Math.sqrt(variance) / sigma - 1)).toBeLessThan(0.01)
    if (distribution !== 'normal')
      expect(Math.max(...values.slice(0, 1e5).map(Math.abs))).toBeLessThanOrEqual(1)
  })
})

describe('simulated units', () => {
  const points = (seed: number, number: number) => simulateUnit(design, seed, number)[0]!.points

  test('repeat from the seed, and a unit does not depend on how many there are', () => {
    expect(points(1, 4)).toEqual(points(1, 4))
    expect(points(1, 4)).not.toEqual(points(2, 4))
    expect(points(1, 4)).not.toEqual(points(1, 5))
  })

  test('a channel or range alone has the numbers that it has among the others', () => {
    const four = designWith({ channels: ['1', '2', '3', '4'] })
    const all = simulateUnit(four, 1, 0)
    expect(all.map(({ channel }) => channel)).toEqual(['1', '2', '3', '4'])
    expect(simulateUnit(four, 1, 0, { channel: '3' })).toEqual([all[2]])
  })

  test('stay within the budget: no gain error over the limits, offsets as their normal line says', () => {
    const fits = Array.from(
      { length: 400 },
      (_, i) =>
        fitPoints(
          design,
          points(3, i).map(({ code, readings }) => ({ code, measured: readings[0]! })),
        ).fit,
    )
    // 120 + 250 ppm, and the bow of 1 LSB cannot turn the line by more than 4 ppm.
    expect(fits.every(({ gainErrorPpm }) => Math.abs(gainErrorPpm) < 374)).toBe(true)
    expect(fits.some(({ gainErrorPpm }) => Math.abs(gainErrorPpm) > 250)).toBe(true)
    const offsets = fits.map(({ offsetErrorV }) => offsetErrorV)
    const rms = Math.sqrt(offsets.reduce((sum, v) => sum + v * v, 0) / offsets.length)
    // Normal, limit 30 µV at k = 2: 15 µV; the bow, rectangular within 1 LSB, adds about 15 µV.
    expect(rms).toBeGreaterThan(12e-6)
    expect(rms).toBeLessThan(35e-6)
    const bows = fits.map(({ linearity }) => linearity.maxLsb)
    expect(Math.max(...bows)).toBeLessThan(1)
    expect(Math.max(...bows)).toBeGreaterThan(0.2)
  })

  test('readings scatter as the plan says and come in its number', () => {
    const noisy = designWith({ measurement: { ...design.measurement, readings: 50, noiseV: 1e-5 } })
    const { readings } = simulateUnit(noisy, 1, 0)[0]!.points[2]!
    expect(readings).toHaveLength(50)
    const mean = readings.reduce((sum, v) => sum + v, 0) / 50
    const s = Math.sqrt(readings.reduce((sum, v) => sum + (v - mean) ** 2, 0) / 49)
    expect(s).toBeGreaterThan(0.6e-5)
    expect(s).toBeLessThan(1.4e-5)
  })

  test('the CSV is read back by the parser to the same numbers', () => {
    const noisy = designWith({
      channels: ['A,1', 'B'],
      measurement: { ...design.measurement, readings: 3, noiseV: 1e-5 },
    })
    const measurements = [0, 1].flatMap((number) => simulateUnit(noisy, 5, number))
    const { groups, problems } = parsePointsCsv(
      simulatedHeader({ readings: 3 }) + measurements.map((one) => simulatedRows(one)).join(''),
    )
    expect(problems).toEqual([])
    expect(groups.map(({ unit, channel, range, points }) => ({ unit, channel, range, points }))).toEqual(
      measurements,
    )
  })
})

describe('the simulated bench', () => {
  const quiet = designWith({ measurement: { ...design.measurement, readings: 4, noiseV: 2e-7 } })
  const asFound = (number: number, bench = {}) => simulateUnit(quiet, 9, number, {}, bench)[0]!
  const codesOf = (number: number) => computeCodes(quiet, asFound(number).points, { applied: 'neutral' })

  test('codes that are loaded move the same unit as the adjusters really do, within their tolerance', () => {
    const factors: number[] = []
    for (let number = 0; number < 40; number++) {
      const first = codesOf(number)
      const codes = first.trim.codes
      if (codes === null) continue
      const left = asFound(number, { codesOf: () => codes })
      expect(left.applied).toEqual(codes)
      const second = computeCodes(quiet, left.points, { applied: codes, learned: first })
      const found = Math.abs(first.fit.gainErrorPpm)
      // The tolerance of the effect is what is left of the error, and not more.
      expect(Math.abs(second.fit.gainErrorPpm)).toBeLessThan(0.2 * found + 2)
      const { gain } = second.trim.effects
      if (gain?.source === 'learned') factors.push(gain.factor)
    }
    expect(factors.length).toBeGreaterThan(20)
    expect(Math.max(...factors)).toBeGreaterThan(1.08)
    expect(Math.min(...factors)).toBeLessThan(0.92)
    for (const factor of factors) expect(Math.abs(factor - 1)).toBeLessThan(0.23)
  })

  test('a second look at a unit changes nothing in its first', () => {
    const only = simulateUnit(quiet, 9, 3)
    simulateUnit(quiet, 9, 3, {}, { codesOf: () => ({ gain: 2000 }), unsettled: 1 })
    expect(simulateUnit(quiet, 9, 3, {}, { codesOf: () => 'neutral', unsettled: 0 })).toEqual(only)
    const with2000 = asFound(3, { codesOf: () => ({ gain: 2000, offset: 2048 }) })
    expect(asFound(3, { codesOf: () => ({ gain: 2000, offset: 2048 }) })).toEqual(with2000)
    expect(simulateUnit(quiet, 9, 3, {}, { codesOf: () => null })).toEqual([])
  })

  test('readings taken too early run in, and the fit finds them', () => {
    const flagged = (unsettled: number) =>
      Array.from({ length: 60 }, (_, number) => {
        const { points } = asFound(number, { unsettled })
        return fitPoints(quiet, points).fit.flags.some(({ flag }) => flag === 'unsettled')
      }).filter(Boolean).length
    expect(flagged(0)).toBe(0)
    expect(flagged(1)).toBeGreaterThan(55)
    const some = flagged(0.25)
    expect(some).toBeGreaterThan(5)
    expect(some).toBeLessThan(28)
  })

  test('the CSV says which codes were loaded and what measured', () => {
    const columns = { applied: true, instrument: 'DMM-07' }
    const measured = asFound(0, { codesOf: () => ({ gain: 2000, offset: 2048 }) })
    const { groups, problems } = parsePointsCsv(
      simulatedHeader({ readings: 4, ...columns }) + simulatedRows(measured, columns),
    )
    expect(problems).toEqual([])
    expect(groups[0]).toMatchObject({ applied: { gain: 2000, offset: 2048 }, instrument: 'DMM-07' })
    expect(groups[0]?.points).toEqual(measured.points)
  })
})
