import { OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import { powerOfTwo } from './distribution/elementary.ts'
import type { Coding, Design, LimitWithUnit, Range } from './types.ts'

/** One range of a converter with everything that depends on it alone (solver.md section 1). Volts unless said. */
export type ConverterRange = {
  id: string
  bits: number
  coding: Coding
  /** Number of codes, 2^bits. */
  count: number
  lowV: number
  fsrV: number
  lsbV: number
  /** Full-scale output, x_FS = H - LSB. */
  fullScaleV: number
  /** Where offset is read: 0 V or the low end. */
  x0: number
  /** z = x - x0 at the low end and at full scale; the larger |z|. */
  zLow: number
  zFull: number
  zMax: number
  /** z_F, the end where a gain adjuster alone nulls the error. */
  zGain: number
  inlLsb: number
}

/**
 * The range of a design by its id, checked; without an id the only one.
 * @throws range-required, range-unknown
 * @example rangeOf(unipolar18, 'u10').id // 'u10'
 */
export function rangeOf(design: Design, rangeId?: string): Range {
  if (rangeId === undefined) {
    if (design.ranges.length === 1) return design.ranges[0]!
    const ids = design.ranges.map((range) => range.id).join(', ')
    throw new OgeeError('range-required', `The design has several ranges: name one of ${ids}.`)
  }
  const range = design.ranges.find((candidate) => candidate.id === rangeId)
  if (range) return range
  const ids = design.ranges.map((candidate) => candidate.id).join(', ')
  throw new OgeeError('range-unknown', `The design has no range ${rangeId}. It has ${ids}.`)
}

/**
 * What follows from resolution and range: LSB, full-scale output, offset point, gain point.
 * @param design its converter: bits N, 4 to 24; lowV L < highV H, volts
 * @throws bits-out-of-bounds, range-reversed, range-out-of-bounds, not-finite, range-required, range-unknown
 * Source: solver.md section 1; LSB = FSR/2^N, W. Kester (ed.), Data Conversion Handbook (2005), chapter 2.
 * @example converterRange(unipolar18, 'u10').lsbV // 10 / 262144
 */
export function converterRange(design: Design, rangeId?: string): ConverterRange {
  const { bits, coding, inlLsb } = design.converter
  const range = rangeOf(design, rangeId)
  const path = `/ranges/${design.ranges.indexOf(range)}`
  if (!Number.isInteger(bits) || bits < limits.converterBitsMin || bits > limits.converterBitsMax) {
    const detail = `${bits} bits: the converter may have ${limits.converterBitsMin} to ${limits.converterBitsMax}.`
    throw new OgeeError('bits-out-of-bounds', detail, {
      errors: [{ path: '/converter/bits', message: detail }],
    })
  }
  const { lowV, highV } = range
  if (!Number.isFinite(lowV) || !Number.isFinite(highV) || !Number.isFinite(highV - lowV)) {
    const detail = `Range ${range.id}: ${lowV} V to ${highV} V is not a pair of finite voltages.`
    throw new OgeeError('not-finite', detail, { errors: [{ path: `${path}/highV`, message: detail }] })
  }
  if (!(lowV < highV)) {
    const detail = `Range ${range.id}: ${highV} V is not above ${lowV} V. Channels that fall with code are not served.`
    throw new OgeeError('range-reversed', detail, { errors: [{ path: `${path}/highV`, message: detail }] })
  }
  const span = highV - lowV
  if (span < limits.rangeSpanMinV || Math.max(-lowV, highV) > limits.rangeEndMaxV) {
    const detail = `Range ${range.id}: ${lowV} V to ${highV} V is not between ${limits.rangeSpanMinV} V wide and ${limits.rangeEndMaxV} V high.`
    throw new OgeeError('range-out-of-bounds', detail, {
      errors: [{ path: `${path}/highV`, message: detail }],
    })
  }
  return derive(range, bits, coding, inlLsb ?? 0)
}

function derive(range: Range, bits: number, coding: Coding, inlLsb: number): ConverterRange {
  const { lowV, highV } = range
  const count = powerOfTwo(bits)
  const fsrV = highV - lowV
  const lsbV = fsrV / count
  const fullScaleV = highV - lsbV
  const x0 = range.offsetAt !== 'low-end' && lowV <= 0 && highV >= 0 ? 0 : lowV
  const zLow = lowV - x0
  const zFull = fullScaleV - x0
  const low = Math.abs(zLow)
  const full = Math.abs(zFull)
  // Full scale when the two differ by one LSB or less; the millionth forgives the rounding of H - LSB.
  const zGain = low - full > lsbV * 1.000001 ? zLow : zFull
  return {
    id: range.id,
    bits,
    coding,
    count,
    lowV,
    fsrV,
    lsbV,
    fullScaleV,
    x0,
    zLow,
    zFull,
    zMax: Math.max(low, full),
    zGain,
    inlLsb,
  }
}

/**
 * The ideal output x(c) = L + c·LSB of a code index, volts.
 * @example idealV(range, 131072) // 5
 */
export function idealV(range: ConverterRange, code: number): number {
  return range.lowV + code * range.lsbV
}

/**
 * The code nearest to a wanted voltage, halves upward; null outside [L - LSB/2, x_FS + LSB/2). Never a silent clamp.
 * @example nearestCode(range, 5) // 131072
 */
export function nearestCode(range: ConverterRange, targetV: number): number | null {
  const steps = (targetV - range.lowV) / range.lsbV
  const whole = Math.floor(steps)
  const code = steps - whole >= 0.5 ? whole + 1 : whole
  return code >= 0 && code < range.count ? code : null
}

/**
 * A limit with its unit in volts: LSB, ppm of FSR or V.
 * @example limitInVolts({ value: 0.5, unit: 'LSB' }, range) // range.lsbV / 2
 */
export function limitInVolts(limit: LimitWithUnit, range: ConverterRange): number {
  if (limit.unit === 'LSB') return limit.value * range.lsbV
  if (limit.unit === 'ppm') return (limit.value * range.fsrV) / 1e6
  return limit.value
}
