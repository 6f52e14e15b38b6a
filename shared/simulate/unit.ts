import type { Design } from '../contract/design.ts'
import { appliedVoltages } from '../solver/applied.ts'
import { prepareTrim } from '../solver/prepare-trim.ts'
import { draw, either, normal } from '../solver/random/draw.ts'
import { type Random, randomStream } from '../solver/random/generator.ts'
import type { Applied, PerAdjuster, Which } from '../solver/types.ts'

export type SimulatedPoint = { code: number; readings: number[] }
export type Place = { unit: string; channel: string; range: string }
/** One measurement as a station would hand it in; `applied` where codes were loaded. */
export type SimulatedMeasurement = Place & { points: SimulatedPoint[]; applied?: Codes }

type Codes = PerAdjuster<number>
type Range = Design['ranges'][number]
type Only = { channel?: string | undefined; range?: string | undefined }

/** How the bench stands while units are measured. */
export type Bench = {
  /** Codes loaded in a place: `neutral` as from assembly; null leaves the place unmeasured. Left out: neutral. */
  codesOf?: ((place: Place) => Applied | null) | undefined
  /** Share of the measurements in which one point was read before it had settled. */
  unsettled?: number | undefined
}

/** Streams beside the unit's own, so that what is drawn for one purpose does not shift what is drawn for another. */
const streams = { effects: 2 ** 30, noiseWithCodes: 2 * 2 ** 30, settling: 3 * 2 ** 30 }
export const unitsMost = 100_000_000

/**
 * What a station would read of simulated unit `number` (0, 1, …): for each channel and range, the plan's codes and readings.
 * Hidden in it are a gain and an offset drawn from the budget's `initial` lines by their distributions, a bow within the
 * converter's INL, adjusters that move the output more or less than designed, within their effect tolerance, and the
 * plan's noise; volts, rounded to the meter's resolution or a nanovolt. The same seed and number give the same unit, bit
 * for bit, on every engine, fresh from assembly or with codes loaded.
 * @throws applied-unknown for codes that the design does not have, and what `prepareTrim` throws
 */
export function simulateUnit(
  design: Design,
  seed: number,
  number: number,
  only: Only = {},
  bench: Bench = {},
): SimulatedMeasurement[] {
  const random = randomStream(seed, number)
  const factors = factorsOf(design, randomStream(seed, streams.effects + number))
  const settling = randomStream(seed, streams.settling + number)
  const unit = `S${String(number + 1).padStart(6, '0')}`
  const all: SimulatedMeasurement[] = []
  // Every channel and range is drawn even when only one is wanted: a choice must not change the numbers.
  for (const [i, channel] of design.channels.entries()) {
    for (const range of design.ranges) {
      const place = { unit, channel, range: range.id }
      const error = errorOf(design, range, random)
      const fresh = measure(design, error, range, random)
      const late = lateOf(design, range, settling, bench.unsettled ?? 0)
      const applied = bench.codesOf ? bench.codesOf(place) : 'neutral'
      if (applied === null || !isWanted(place, only)) continue
      if (applied === 'neutral') {
        all.push({ ...place, points: unsettle(fresh, late) })
        continue
      }
      const noise = randomStream(seed, streams.noiseWithCodes + number)
      // Another pass is read at another time: its noise is another.
      for (let skip = passOf(applied, i); skip > 0; skip--) noise()
      const moved = movedBy(design, range, applied, factors[i]!)
      const points = measure(design, (x) => error(x) + moved(x), range, noise)
      all.push({ ...place, points: unsettle(points, late), applied })
    }
  }
  return all
}

const isWanted = ({ channel, range }: Place, only: Only): boolean =>
  (only.channel === undefined || channel === only.channel) &&
  (only.range === undefined || range === only.range)

const passOf = ({ gain = 0, offset = 0 }: Codes, channel: number): number =>
  (31 * gain + 17 * offset + 7 * channel) % 997

/** How much more than designed each adjuster of each channel moves the output, within its tolerance. */
function factorsOf(design: Design, random: Random): { gain: number; offset: number }[] {
  const factor = (which: Which) => 1 + (design.adjusters[which]?.effectTolerance ?? 0) * either(random)
  return design.channels.map(() => ({ gain: factor('gain'), offset: factor('offset') }))
}

/** What loaded codes add to the output, volts at output x. */
function movedBy(
  design: Design,
  range: Range,
  applied: Codes,
  factors: { gain: number; offset: number },
): (x: number) => number {
  const { channel, trimmers } = prepareTrim(design, range.id)
  const nodes = appliedVoltages(trimmers, applied)
  return (x) => {
    let moved = 0
    for (const which of ['gain', 'offset'] as const) {
      const trimmer = trimmers[which]
      if (trimmer === null) continue
      const z = x - channel.range.x0
      moved += factors[which] * (trimmer.alpha + trimmer.beta * z) * (nodes[which] - trimmer.nominalV)
    }
    return moved
  }
}

type Late = { point: number; byV: number } | null

/** Which point was read too early, and by how much its first reading is off: 2 to 6 LSB, either way. */
function lateOf(design: Design, range: Range, random: Random, share: number): Late {
  const [isLate, which, size] = [random(), random(), either(random)]
  if (isLate >= share) return null
  const { lsb } = span(design, range)
  const byV = (size < 0 ? -1 : 1) * (2 + 4 * Math.abs(size)) * lsb
  return { point: Math.floor(which * design.measurement.points.length), byV }
}

/** A warming or auto-zeroing amplifier: the readings of that point run in, evenly, to where they belong. */
function unsettle(points: SimulatedPoint[], late: Late): SimulatedPoint[] {
  if (late === null) return points
  return points.map((point, i) => {
    const last = point.readings.length - 1
    if (i !== late.point || last < 1) return point
    const readings = point.readings.map((value, j) => rounded(value + late.byV * (1 - j / last), 1e-9))
    return { ...point, readings }
  })
}

/** The hidden error of one channel and range, volts at output x. */
function errorOf(design: Design, range: Range, random: Random): (x: number) => number {
  const gains = (design.budget?.gain ?? [])
    .filter(({ when }) => when === 'initial')
    .map((line) => ({
      ratio: 1e-6 * ((line.nominalPpm ?? 0) + draw(random, line, line.limitPpm)),
      pivotV: line.pivotV ?? 0,
    }))
  let offset = 0
  for (const line of design.budget?.offset ?? []) {
    if (line.when === 'initial') offset += (line.nominalV ?? 0) + draw(random, line, line.limitV)
  }
  const { lowV, topV, lsb } = span(design, range)
  const bow = (design.converter.inlLsb ?? 0) * lsb * either(random)
  const half = (topV - lowV) / 2
  return (x) => {
    let error = offset + (bow * ((x - lowV) * (topV - x))) / (half * half)
    for (const { ratio, pivotV } of gains) error += ratio * (x - pivotV)
    return error
  }
}

function measure(
  design: Design,
  error: (x: number) => number,
  range: Range,
  random: Random,
): SimulatedPoint[] {
  const { points, readings = 1, noiseV = 0, resolutionV = 1e-9 } = design.measurement
  const { lowV, lsb } = span(design, range)
  return points.map((code) => {
    const ideal = lowV + code * lsb
    const output = ideal + error(ideal)
    return {
      code,
      readings: Array.from({ length: readings }, () =>
        rounded(output + noiseV * normal(random), resolutionV),
      ),
    }
  })
}

function span(design: Design, { lowV, highV }: Range): { lowV: number; topV: number; lsb: number } {
  let steps = 1
  for (let bit = 0; bit < design.converter.bits; bit++) steps *= 2
  const lsb = (highV - lowV) / steps
  return { lowV, topV: highV - lsb, lsb }
}

/** To whole counts. Counts of a decimal step are divided by its inverse, so that they print short. */
function rounded(value: number, step: number): number {
  const inverse = Math.round(1 / step)
  const isDecimal = Math.abs(inverse * step - 1) < 1e-12
  return isDecimal ? Math.round(value * inverse) / inverse : Math.round(value / step) * step
}
