import { type ErrorCode, type FieldError, OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import { type ConverterRange, idealV } from './converter.ts'
import { codeOf, type Refuse } from './point-code.ts'
import type { PointRules } from './point-rules.ts'
import { type Pooled, pooledReadings } from './readings.ts'
import type { MeasuredPoint } from './types.ts'

/** Points as the fit reads them: sorted by code, then y, then u. Parallel arrays, volts. */
export type PointSet = {
  n: number
  codes: number[]
  x: number[]
  y: number[]
  /** e = y - x and z = x - x0. */
  e: number[]
  z: number[]
  /** Standard uncertainties of y when every point has one from one source, else null. */
  u: number[] | null
  /** Stated u of each point, 0 where none is. */
  stated: number[]
  /** Degrees of freedom of u: Infinity when stated. */
  uDof: number
  source: 'stated' | 'readings' | 'none'
  readings: (readonly number[] | null)[]
  /** Distinct codes. */
  distinct: number
  notes: string[]
}

type Taken = {
  code: number
  y: number
  u: number
  readings: readonly number[] | null
  temperatureC: number | undefined
}

type Refusal = FieldError & { code: ErrorCode }

/**
 * Checks points, settles their codes and uncertainties and sorts them. Every bad point is named at once.
 * @throws code-out-of-range, outside-range, code-target-disagree, not-finite, uncertainty-not-positive,
 *   implausible-point, implausible-uncertainty, too-few-codes, point-incomplete; `errors[].path` is `/points/<index as given>/<field>`
 * Source: solver.md section 2.
 */
export function takePoints(
  points: readonly MeasuredPoint[],
  range: ConverterRange,
  rules: PointRules,
): PointSet {
  if (points.length > limits.pointsMax) {
    throw new OgeeError('too-many-points', `${points.length} points: at most ${limits.pointsMax} are taken.`)
  }
  const refused: Refusal[] = []
  const taken: Taken[] = []
  const place = { at: 0 }
  const refuse = refusingInto(refused, place)
  let sorted = true
  for (; place.at < points.length; place.at++) {
    const point = takePoint(points[place.at]!, place.at, range, rules, refuse)
    if (point === null) continue
    const before = taken[taken.length - 1]
    if (before !== undefined && byCodeThenValue(before, point) > 0) sorted = false
    taken.push(point)
  }
  if (refused.length > 0) {
    const first = refused[0]!
    const more = refused.length > 1 ? ` ${refused.length - 1} more are listed.` : ''
    throw new OgeeError(first.code, `${first.message}${more}`, {
      errors: refused.map(({ path, message }) => ({ path, message })),
    })
  }
  if (!sorted) taken.sort(byCodeThenValue)
  return assemble(taken, range, rules)
}

/** Notes what is wrong with the point at `place`. */
function refusingInto(refused: Refusal[], place: { readonly at: number }): Refuse {
  return (code, field, message) => {
    refused.push({ code, path: `/points/${place.at}/${field}`, message })
    return null
  }
}

function byCodeThenValue(a: Taken, b: Taken): number {
  return a.code - b.code || a.y - b.y || a.u - b.u || (a.readings?.length ?? 0) - (b.readings?.length ?? 0)
}

function takePoint(
  point: MeasuredPoint,
  i: number,
  range: ConverterRange,
  rules: PointRules,
  refuse: Refuse,
): Taken | null {
  const code = codeOf(point, range, refuse)
  if (code === null) return null
  const { readings, uncertainty } = point
  const field = point.measured === undefined ? 'readings' : 'measured'
  if (readings?.some((value) => !Number.isFinite(value))) {
    return refuse('not-finite', 'readings', `Point ${i + 1}: a reading is not a finite number.`)
  }
  const y = point.measured ?? (readings?.length ? mean(readings) : undefined)
  if (y === undefined) {
    return refuse(
      'point-incomplete',
      'measured',
      `Point ${i + 1} has no measured value. Give measured or readings.`,
    )
  }
  if (!Number.isFinite(y)) {
    return refuse('not-finite', field, `Point ${i + 1}: the measured value is not a finite number.`)
  }
  if (uncertainty !== undefined && !(uncertainty > 0 && Number.isFinite(uncertainty))) {
    const code = Number.isFinite(uncertainty) ? 'uncertainty-not-positive' : 'not-finite'
    return refuse(
      code,
      'uncertainty',
      `Point ${i + 1}: the standard uncertainty is ${uncertainty} V; it must be over 0 V. Leave it out when it is not known.`,
    )
  }
  if (uncertainty !== undefined && (uncertainty < leastU(range) || uncertainty > range.fsrV)) {
    return refuse(
      'implausible-uncertainty',
      'uncertainty',
      `Point ${i + 1}: a standard uncertainty of ${uncertainty} V cannot be for a range of ${range.fsrV} V. Check its unit.`,
    )
  }
  const away = Math.abs(y - idealV(range, code))
  if (away > (rules.plausiblePercent / 100) * range.fsrV) {
    return refuse(
      'implausible-point',
      field,
      `${y} V at code ${code} is ${Number(away.toPrecision(4))} V from ideal; ${rules.plausiblePercent} % of FSR is allowed. Check the unit, the range and the wires.`,
    )
  }
  return { code, y, u: uncertainty ?? 0, readings: readings ?? null, temperatureC: point.temperatureC }
}

/** The mean about the first reading, so that equal readings have exactly that mean. */
export function mean(values: readonly number[]): number {
  const first = values[0]!
  let sum = 0
  for (let i = 1; i < values.length; i++) sum += values[i]! - first
  return first + sum / values.length
}

function assemble(taken: readonly Taken[], range: ConverterRange, rules: PointRules): PointSet {
  const n = taken.length
  const set: PointSet = {
    n,
    codes: new Array(n),
    x: new Array(n),
    y: new Array(n),
    e: new Array(n),
    z: new Array(n),
    u: null,
    stated: new Array(n),
    uDof: Number.POSITIVE_INFINITY,
    source: 'none',
    readings: new Array(n),
    distinct: 0,
    notes: [],
  }
  let last = -1
  for (let i = 0; i < n; i++) {
    const { code, y, readings } = taken[i]!
    const x = idealV(range, code)
    set.codes[i] = code
    set.x[i] = x
    set.y[i] = y
    set.e[i] = y - x
    set.z[i] = x - range.x0
    set.readings[i] = readings
    set.stated[i] = taken[i]!.u
    if (code !== last) set.distinct += 1
    last = code
  }
  if (set.distinct < rules.minCodes) tooFew(set, rules.minCodes)
  settleUncertainty(set, taken, rules.resolutionV, leastU(range))
  noteTemperatures(set, taken)
  return set
}

function tooFew({ n, distinct }: PointSet, minCodes: number): never {
  const have = n === 0 ? 'No point' : distinct === 1 && n > 1 ? `${n} points at one code` : 'One point'
  const need =
    minCodes === 1
      ? 'one is the least'
      : 'two different codes are the least that gives a line. Measure another code'
  const message = `${have}: ${need}.`
  throw new OgeeError('too-few-codes', message, { errors: [{ path: '/points', message }] })
}

/** Nothing is known better than a billionth of a billionth of the range; weights stay inside the doubles. */
function leastU(range: ConverterRange): number {
  return range.fsrV * 1e-18
}

/** One source of u for all points: stated, or readings. A mixture gives none and says so. */
function settleUncertainty(set: PointSet, taken: readonly Taken[], resolutionV: number, least: number): void {
  let stated = 0
  for (const point of taken) if (point.u > 0) stated += 1
  if (stated === set.n) {
    set.u = set.stated
    set.source = 'stated'
    return
  }
  const pooled: Pooled = pooledReadings(set.readings)
  if (stated > 0) {
    set.notes.push('mixed-uncertainty')
  } else if (pooled.dof > 0) {
    if (!pooled.complete) set.notes.push('mixed-uncertainty')
    else if (Math.sqrt(pooled.variance) + resolutionV > least * limits.readingsMax) {
      const q2 = (resolutionV * resolutionV) / 12
      set.u = set.readings.map((list) => Math.sqrt(pooled.variance / list!.length + q2))
      set.uDof = pooled.dof
      set.source = 'readings'
    }
  }
}

function noteTemperatures(set: PointSet, taken: readonly Taken[]): void {
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  for (const { temperatureC } of taken) {
    if (temperatureC === undefined) continue
    if (temperatureC < low) low = temperatureC
    if (temperatureC > high) high = temperatureC
  }
  if (high - low > 1) set.notes.push('temperature-spread')
}
