import type { RecordBody } from '../../../shared/contract/record.ts'
import { canonicalText } from '../../../shared/ledger/canonical.ts'
import { measuredAtOf } from '../../../shared/measured-at.ts'
import type { RevisionInPlay } from './catalogue.ts'
import type { Known } from './followed.ts'
import type { Used } from './instrument.ts'
import type { Job } from './job.ts'
import type { CurrentCodes, Place, PlaceState } from './place.ts'

/** What is known when one request is decided; decisions read it and change nothing. */
export type Context = {
  job: Job
  id: string
  number: number
  recordedAt: string
  revision: RevisionInPlay
  unit: { id: number; fresh: boolean }
  place: Place
  state: PlaceState
  known: Known
  instrument: Used | null
}

/** A record to be, and how its place stands after it. */
export type Decision = { body: RecordBody; notices: NoticeList; state: PlaceState; context: Context }
export type NoticeList = { code: NoticeCode; message: string; record?: string }[]
type NoticeCode =
  | 'newer-record'
  | 'revision-withdrawn'
  | 'released-by-author'
  | 'instrument-overdue'
  | 'clock-skew'
  | 'claimed-codes-differ'
  | 'overridden'
  | 'withdrawn'
  | 'replayed'

/** What a kind of record says for itself; the rest is the same for all. */
export type Own = Pick<
  RecordBody,
  'lot' | 'pass' | 'follows' | 'applied' | 'effects' | 'points' | 'result' | 'verdict' | 'accepted'
>

/** Every field by its name: objects spread into one another made a third of the work of a decision. */
export function bodyOf(context: Context, own: Own): RecordBody {
  const { job, id, number, recordedAt, revision, place, instrument } = context
  const { request, recorder } = job
  return {
    format: 'ogee.record/1',
    id,
    number,
    kind: request.kind,
    unit: request.unit,
    channel: place.channel,
    range: place.range,
    lot: own.lot,
    design: revision.design,
    revision: revision.number,
    designHash: revision.hash,
    pass: own.pass,
    follows: own.follows,
    applied: own.applied,
    effects: own.effects,
    points: own.points,
    conditions: request.conditions ?? {},
    instrument: instrument?.facts,
    reason: request.reason ?? null,
    claimed: request.claimed ?? null,
    result: own.result,
    verdict: own.verdict,
    accepted: own.accepted,
    by: recorder.by,
    station: recorder.station?.name ?? null,
    measuredAt: measuredAtOf(request),
    recordedAt,
  }
}

export function lastOf({ id, recordedAt, job }: Context): PlaceState['last'] {
  return { record: id, recordedAt, station: job.recorder.station?.id ?? null }
}

export function currentFrom(body: RecordBody): CurrentCodes | null {
  const { result } = body
  if (result?.format !== 'ogee.codes/1' || result.trim.codes === null) return null
  return {
    record: body.id,
    number: body.number,
    revision: body.revision,
    recordedAt: body.recordedAt,
    codes: result.trim.codes,
    words: result.trim.words ?? {},
  }
}

export const sameJson = (a: object | null, b: object | null) =>
  canonicalText(a as never) === canonicalText(b as never)
