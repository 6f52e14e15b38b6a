import { overdueSentence } from '../../../shared/calibration.ts'
import type { RecordBody } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { measuredAtOf } from '../../../shared/measured-at.ts'
import { type Context, type NoticeList, sameJson } from './context.ts'

/** What the sender should hear beside the result. None of it changes the result. */
export function measurementNotices(context: Context, body: RecordBody): NoticeList {
  return [
    ...newerRecord(context, body),
    ...withdrawnRevision(context),
    ...releasedByAuthor(context),
    ...overdueInstrument(context),
    ...clockSkew(context, body),
    ...claimedCodes(context, body),
  ]
}

/** Somebody else recorded first: after the record that this one follows, or after this was measured. */
function newerRecord({ state, job }: Context, body: RecordBody): NoticeList {
  const { last, measurement } = state
  const followsOlder = body.follows !== null && measurement !== null && body.follows !== measurement
  const elsewhere = last !== null && last.station !== (job.recorder.station?.id ?? null)
  const measuredBefore =
    last !== null && body.measuredAt !== null && Date.parse(body.measuredAt) < Date.parse(last.recordedAt)
  if (!followsOlder && !(elsewhere && measuredBefore)) return []
  const record = followsOlder ? measurement : (last?.record ?? null)
  const message = 'There is a newer record of this unit, channel and range than the one this was based on.'
  return [{ code: 'newer-record', message, ...(record === null ? {} : { record }) }]
}

/** A fresh unit under a withdrawn revision is refused, unless its codes were given out, or it was measured, before. */
export function requireUsableRevision({ revision, unit, job }: Context): void {
  if (revision.state !== 'withdrawn' || !unit.fresh || job.request.claimed !== undefined) return
  const measuredAt = measuredAtOf(job.request)
  const before =
    measuredAt !== null &&
    revision.withdrawnAt !== null &&
    Date.parse(measuredAt) < revision.withdrawnAt.getTime()
  if (before) return
  throw new OgeeError(
    'revision-withdrawn',
    `Revision ${revision.number} of ${revision.design} was withdrawn; a new unit needs a released one.`,
    { errors: [{ path: '/revision', message: 'Withdrawn.' }] },
  )
}

function withdrawnRevision({ revision }: Context): NoticeList {
  if (revision.state !== 'withdrawn') return []
  return [
    {
      code: 'revision-withdrawn',
      message: `Revision ${revision.number} of ${revision.design} was withdrawn.`,
    },
  ]
}

/** Where a site lets an author release, everything that was made under it says so. */
function releasedByAuthor({ revision }: Context): NoticeList {
  if (!revision.releasedByAuthor) return []
  const message = `Revision ${revision.number} of ${revision.design} was released by its author.`
  return [{ code: 'released-by-author', message }]
}

/** Only where the site allows it: otherwise it was refused. */
function overdueInstrument({ instrument }: Context): NoticeList {
  if (!instrument?.isOverdue) return []
  const { id, dueOn } = instrument.facts
  return [{ code: 'instrument-overdue', message: `${overdueSentence(id, dueOn)} The site allows it.` }]
}

/** A clock ahead of ours is wrong; one behind may belong to a measurement that waited. */
function clockSkew({ recordedAt, job }: Context, body: RecordBody): NoticeList {
  const said = [body.measuredAt, job.request.claimed?.at ?? null].flatMap((at) =>
    at === null ? [] : Date.parse(at),
  )
  const ahead = (Math.max(...said, Number.NEGATIVE_INFINITY) - Date.parse(recordedAt)) / 1_000
  if (!(ahead > limits.clockSkewNoticeSeconds)) return []
  return [
    { code: 'clock-skew', message: `The station's clock is ${Math.round(ahead)} s ahead of the server's.` },
  ]
}

function claimedCodes({ job }: Context, body: RecordBody): NoticeList {
  const { claimed } = job.request
  if (!claimed || body.result?.format !== 'ogee.codes/1') return []
  if (sameJson(claimed.codes, body.result.trim.codes)) return []
  return [
    {
      code: 'claimed-codes-differ',
      message: 'The codes that the station gave out differ from those computed here; both are kept.',
    },
  ]
}
