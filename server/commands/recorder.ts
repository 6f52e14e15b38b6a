import type { RecordRequest } from '../../shared/contract/record.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Deps } from '../http/deps.ts'
import type { Principal } from '../http/principal.ts'
import { maySeeDesign } from '../policies/may-see.ts'
import { coalesce } from './coalesce.ts'
import { inFlight, recordTrims } from './record-trims.ts'
import { checkRequest } from './recording/check-request.ts'
import { bodyHashOf, type Job, recorderOf, type StoredRecord, weightOf } from './recording/job.ts'
import { keyOf } from './recording/keys.ts'
import { recordNumbers } from './recording/record-numbers.ts'

export type Asked = { principal: Principal; request: RecordRequest; rawBody: unknown; key: string }
export type Recorded = { record: StoredRecord; replayed: boolean }
export type RecordOne = (asked: Asked) => Promise<Recorded>

/** The one door to recording for requests that come one by one. */
export function createRecorder(deps: Pick<Deps, 'database' | 'signer' | 'now' | 'notifyLedger'>): RecordOne {
  const recording = { ...deps, numbers: recordNumbers(deps.database) }
  const record = coalesce(
    (jobs: readonly Job[]) => recordTrims(recording, jobs),
    (job) => weightOf(job.request),
  )
  const inWork = new Set<string>()

  return async (asked) => {
    const job = jobOf(asked)
    const key = keyOf(job)
    if (inWork.has(key)) throw inFlight()
    inWork.add(key)
    try {
      // What is said about a record is worked out from stored records, so it shares no transaction with new ones.
      const isMeasurement = job.request.kind === 'trim' || job.request.kind === 'verify'
      const outcome = isMeasurement ? await record(job) : (await recordTrims(recording, [job]))[0]!
      if (!outcome.done) throw outcome.error
      return outcome
    } finally {
      inWork.delete(key)
    }
  }
}

export function jobOf({ principal, request, rawBody, key }: Asked): Job {
  if (!maySeeDesign(principal, request.design)) {
    throw new OgeeError('not-found', `There is no design ${request.design}, or it is not open to you.`)
  }
  const recorder = recorderOf(principal)
  checkRequest(request, recorder)
  return { request, recorder, key, bodyHash: bodyHashOf(rawBody) }
}
