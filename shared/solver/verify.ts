import { OgeeError } from '../errors.ts'
import { type Channel, prepareChannel } from './channel.ts'
import { limitInVolts } from './converter.ts'
import { normalBelow } from './distribution/normal.ts'
import { type FitOptions, fitSet } from './fit.ts'
import { type Combined, expand, type InstrumentU, instrumentU } from './instrument.ts'
import { type PointSet, takePoints } from './points.ts'
import { pooledReadings } from './readings.ts'
import type { Design, JudgedPoint, MeasuredPoint, Outcome, VerifyResult } from './types.ts'
import { SOLVER_VERSION } from './version.ts'

const order: readonly Outcome[] = ['pass', 'conditional-pass', 'conditional-fail', 'fail']

/**
 * As-left points against the design's tolerance.
 * @param points at least one point, measured with the codes applied; volts
 * @returns `ogee.verify/1`: each point with its expanded uncertainty (no fit part), outcome and conformance probability;
 *   the whole takes its worst point's outcome; `tur` is T over the largest U; the fit of the same points where two codes
 *   were measured. Notes: `tur-under-4`, `guard-band-too-wide` (T - U under 0: such a point can never pass)
 * @throws tolerance-missing, uncertainty-unknown (guarded without u, readings or noiseV), and as `fitPoints`
 * Source: solver.md section 8; JCGM 106:2012; ILAC-G8:09/2019.
 * @example verifyPoints(unipolar18, [{ code: 0, measured: 0, uncertainty: 1e-6 }]).outcome // 'pass'
 */
export function verifyPoints(
  design: Design,
  points: readonly MeasuredPoint[],
  options: FitOptions = {},
): VerifyResult {
  const channel = prepareChannel(design, options.rangeId)
  const { decision } = design
  if (decision === undefined) {
    const message = 'The design has no decision part, so there is no tolerance to judge by. Add decision.'
    throw new OgeeError('tolerance-missing', message, { errors: [{ path: '/decision', message }] })
  }
  const set = takePoints(points, channel.range, { ...channel.rules, minCodes: 1 })
  const instrument = options.instrument === undefined ? channel.instrument : options.instrument
  const known = pointUncertainties(set, channel)
  if (known === null && decision.rule === 'guarded') {
    const message =
      'The guarded rule needs the uncertainty of every point. Give uncertainty or several readings, or noiseV in the design.'
    throw new OgeeError('uncertainty-unknown', message, { errors: [{ path: '/points', message }] })
  }
  const toleranceV = limitInVolts(decision.tolerance, channel.range)
  const judged = judgeAll(set, channel, instrumentU(instrument), known, decision.rule, toleranceV)
  const worst = worstOf(judged)
  const largestU = judged.reduce((most, point) => Math.max(most, point.expandedUncertaintyV ?? 0), 0)
  const tur = largestU > 0 ? toleranceV / largestU : null
  const notes = [...set.notes]
  if (tur !== null && tur < 4) notes.push('tur-under-4')
  if (decision.rule === 'guarded' && largestU > toleranceV) notes.push('guard-band-too-wide')
  return {
    format: 'ogee.verify/1',
    solver: SOLVER_VERSION,
    range: channel.range.id,
    rule: decision.rule,
    toleranceV,
    tur,
    outcome: worst.outcome,
    points: judged,
    worst: { code: worst.code, errorV: worst.errorV, errorLsb: worst.errorLsb },
    fit: set.distinct >= 2 ? fitSet(channel, set, options).result : null,
    notes,
  }
}

type PointU = { u: number; dof: number }

/** u of each point from itself: stated, else from all readings, else the plan's noise; null when none says anything. */
function pointUncertainties(set: PointSet, channel: Channel): readonly PointU[] | null {
  const { u, uDof } = set
  if (u !== null) return u.map((value) => ({ u: value, dof: uDof }))
  const { noiseV } = channel.noise
  const pooled = pooledReadings(set.readings)
  const q2 = (channel.rules.resolutionV * channel.rules.resolutionV) / 12
  const result: PointU[] = []
  for (let i = 0; i < set.n; i++) {
    const list = set.readings[i]
    const stated = set.stated[i]!
    if (stated > 0) result.push({ u: stated, dof: Number.POSITIVE_INFINITY })
    else if (list && pooled.dof > 0 && (pooled.variance > 0 || q2 > 0)) {
      result.push({ u: Math.sqrt(pooled.variance / list.length + q2), dof: pooled.dof })
    } else if (noiseV !== null) {
      result.push({ u: noiseV, dof: Number.POSITIVE_INFINITY })
    } else return null
  }
  return result
}

function judgeAll(
  set: PointSet,
  channel: Channel,
  instr: InstrumentU,
  known: readonly PointU[] | null,
  rule: VerifyResult['rule'],
  toleranceV: number,
): JudgedPoint[] {
  return set.codes.map((code, i) => {
    const errorV = set.e[i]!
    const point = known?.[i] ?? null
    const whole = point === null ? null : combine(point.u, instr, set.y[i]!)
    const expanded = whole === null || point === null ? null : expand(whole, point.dof).expanded
    return {
      code,
      idealV: set.x[i]!,
      measuredV: set.y[i]!,
      errorV,
      errorLsb: errorV / channel.range.lsbV,
      expandedUncertaintyV: expanded,
      outcome: decide(rule, Math.abs(errorV), toleranceV, expanded ?? 0),
      conformanceProbability: whole === null ? null : conformance(errorV, toleranceV, whole.u),
    }
  })
}

/** u² = u_point² + (u_ig·y)² + u_io². */
function combine(u: number, instr: InstrumentU, y: number): Combined {
  const common = instr.gain * y * (instr.gain * y) + instr.offset * instr.offset
  return { u: Math.sqrt(u * u + common), fit: u }
}

/**
 * One point's outcome. |e| at T passes the simple rule; guarded: pass up to T - U, fail over T + U.
 * @example decide('guarded', 1, 1, 0.1) // 'conditional-pass'
 */
export function decide(
  rule: VerifyResult['rule'],
  size: number,
  toleranceV: number,
  expandedV: number,
): Outcome {
  if (rule === 'simple') return size <= toleranceV ? 'pass' : 'fail'
  if (size <= toleranceV - expandedV) return 'pass'
  if (size > toleranceV + expandedV) return 'fail'
  return size <= toleranceV ? 'conditional-pass' : 'conditional-fail'
}

/** Φ((T - e)/u) - Φ((-T - e)/u), from the side where nothing cancels (JCGM 106:2012, 7.4). */
export function conformance(errorV: number, toleranceV: number, u: number): number {
  const e = Math.abs(errorV)
  return normalBelow((toleranceV - e) / u) - normalBelow((-toleranceV - e) / u)
}

/** The worst outcome, then the largest error, then the lowest code. */
function worstOf(points: readonly JudgedPoint[]): JudgedPoint {
  let worst = points[0]!
  for (const point of points) {
    const more =
      order.indexOf(point.outcome) - order.indexOf(worst.outcome) ||
      Math.abs(point.errorV) - Math.abs(worst.errorV)
    if (more > 0) worst = point
  }
  return worst
}
