import type { Design } from '../contract/design.ts'
import { draw, either, normal } from '../solver/random/draw.ts'
import { type Random, randomStream } from '../solver/random/generator.ts'

export type SimulatedPoint = { code: number; readings: number[] }
/** One measurement as a station would hand it in. */
export type SimulatedMeasurement = { unit: string; channel: string; range: string; points: SimulatedPoint[] }

type Range = Design['ranges'][number]
type Only = { channel?: string | undefined; range?: string | undefined }

/**
 * What a station would read of simulated unit `number` (0, 1, …), fresh from assembly and nothing loaded: for each channel
 * and range, the plan's codes and readings. Hidden in it are a gain and an offset drawn from the budget's `initial`
 * lines by their distributions, a bow within the converter's INL, and the plan's noise; volts, rounded to the meter's
 * resolution or a nanovolt. The same seed and number give the same unit, bit for bit, on every engine.
 */
export function simulateUnit(
  design: Design,
  seed: number,
  number: number,
  only: Only = {},
): SimulatedMeasurement[] {
  const random = randomStream(seed, number)
  const unit = `S${String(number + 1).padStart(6, '0')}`
  // Every channel and range is drawn even when only one is wanted: a choice must not change the numbers.
  const all = design.channels.flatMap((channel) =>
    design.ranges.map((range) => ({
      unit,
      channel,
      range: range.id,
      points: measure(design, errorOf(design, range, random), range, random),
    })),
  )
  return all.filter(
    ({ channel, range }) =>
      (only.channel === undefined || channel === only.channel) &&
      (only.range === undefined || range === only.range),
  )
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
