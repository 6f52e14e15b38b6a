import type { CodesDocument } from '../../../shared/contract/codes.ts'
import type { Point } from '../../../shared/contract/point.ts'
import type { RecordBody } from '../../../shared/contract/record.ts'
import type { VerifyDocument } from '../../../shared/contract/verify.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { appliedVoltages } from '../../../shared/solver/applied.ts'
import { codesOn } from '../../../shared/solver/codes.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import { verifyPoints } from '../../../shared/solver/verify.ts'
import { channelOf, designOf } from './catalogue.ts'
import { bodyOf, type Context, currentFrom, type Decision, lastOf, sameJson } from './context.ts'
import { type Followed, type Known, measurementBefore } from './followed.ts'
import { measurementNotices } from './notices.ts'
import type { PlaceState } from './place.ts'

type Applied = NonNullable<RecordBody['applied']>
type Judged = Pick<RecordBody, 'result' | 'verdict' | 'accepted'>

/** Computes a trim or a verification. Every computed unit becomes a record, out of reach and suspect included. */
export function decideMeasurement(context: Context): Decision {
  const { job, state, known, place } = context
  const { request } = job
  const isTrim = request.kind === 'trim'
  const follows = request.follows ?? (!isTrim && state.measurement !== null ? 'last' : undefined)
  const before = follows === undefined ? null : measurementBefore(follows, known, state, place)
  const applied = appliedWhileMeasuring(context, before)
  const points = request.points ?? []
  const judged = isTrim ? trim(context, points, applied, before) : verify(context, points, applied)
  const pass = (before?.body.pass ?? 0) + (isTrim ? 1 : 0)
  const body = bodyOf(context, {
    lot: request.lot ?? null,
    pass,
    follows: before?.body.id ?? null,
    applied,
    effects: isTrim ? request.effects : null,
    points,
    result: judged.result,
    verdict: judged.verdict,
    accepted: judged.accepted,
  })
  const current = isTrim && body.accepted ? (currentFrom(body) ?? state.current) : state.current
  return {
    body,
    notices: measurementNotices(context, body),
    state: { current, last: lastOf(context), measurement: body.id, pass, day: countOn(body, state.day) },
    context,
  }
}

/** The day's measurements with this one: measuring until it passes is seen in the last number. */
function countOn({ recordedAt, kind }: RecordBody, before: PlaceState['day']): PlaceState['day'] {
  const on = recordedAt.slice(0, 10)
  const { trim, verify } = before?.on === on ? before : { trim: 0, verify: 0 }
  return kind === 'trim' ? { on, trim: trim + 1, verify } : { on, trim, verify: verify + 1 }
}

function trim(context: Context, points: Point[], applied: Applied, before: Followed | null): Judged {
  const { revision, place, job } = context
  const learned = job.request.effects === 'learned' ? previousPass(context, before, applied) : undefined
  const channel = channelOf(revision.hash, place.range)
  const result = codesOn(channel, points, { applied, learned, ...limitsOf(context) }) as CodesDocument
  const { verdict } = result.trim
  return { result, verdict, accepted: verdict === 'ok' || verdict === 'too-coarse' }
}

/** A named instrument's limits as they are at this moment; without one, the design's. */
const limitsOf = ({ instrument }: Context) => (instrument === null ? {} : { instrument: instrument.facts })

function verify(context: Context, points: Point[], applied: Applied): Judged {
  const { revision, place } = context
  const design = designOf(revision.hash)
  // Codes that the design cannot have are refused here too, although judging does not use them.
  if (applied !== 'neutral') appliedVoltages(channelOf(revision.hash, place.range).trimmers, applied)
  const options = { rangeId: place.range, ...limitsOf(context) }
  const result = verifyPoints(design, points, options) as VerifyDocument
  const { outcome } = result
  return { result, verdict: outcome, accepted: outcome === 'pass' || outcome === 'conditional-pass' }
}

/** Codes loaded but not said would be corrected twice, so only what is certain is filled in (contract.md). */
function appliedWhileMeasuring({ job, state }: Context, before: Followed | null): Applied {
  const { applied, kind } = job.request
  if (applied !== undefined) return applied
  if (kind === 'verify' && before) return codesAfter(before.body)
  if (state.current === null) return 'neutral'
  throw new OgeeError(
    'applied-required',
    `This unit has codes from record ${state.current.number}. Say which codes were loaded while measuring, or "neutral".`,
    { errors: [{ path: '/applied', message: 'Needed, because the unit has current codes.' }] },
  )
}

function codesAfter(body: RecordBody): Applied {
  const given = body.result?.format === 'ogee.codes/1' ? body.result.trim.codes : null
  return given ?? body.applied ?? 'neutral'
}

function previousPass(context: Context, before: Followed | null, applied: Applied): PreviousPass {
  const { revision, place, known } = context
  const teacher = before === null ? null : teacherOf(before, applied, known)
  const result = teacher?.body.result
  if (result?.format === 'ogee.codes/1') return result
  if (teacher && result?.format === 'ogee.verify/1' && result.fit !== null) {
    const { trimmers } = channelOf(revision.hash, place.range)
    const { gain, offset } = appliedVoltages(trimmers, teacher.body.applied ?? 'neutral')
    return { fit: result.fit, trim: { appliedNodeV: { gain, offset } } }
  }
  const message = 'Effects are learned from the measurement before: follow one that has a fit.'
  throw new OgeeError('follows-unknown', message, { errors: [{ path: '/follows', message }] })
}

/** A verification measured with the same codes shows no move, so the measurement that it stands on teaches. */
function teacherOf(before: Followed, applied: Applied, known: Known): Followed {
  let teacher = before
  while (teacher.body.kind === 'verify' && sameJson(asObject(teacher.body.applied), asObject(applied))) {
    const earlier = known.get(teacher.body.follows ?? '')
    if (!earlier || earlier.withdrawn) break
    teacher = earlier
  }
  return teacher
}

const asObject = (applied: RecordBody['applied']) => ({ applied }) as object
