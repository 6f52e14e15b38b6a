import { postTrim } from '../../../shared/contract/trims.ts'
import { errorTable, isOgeeError, OgeeError } from '../../../shared/errors.ts'
import { api } from '../../lib/api.ts'
import { readDraft, writeDraft } from './draft.ts'
import {
  putInOutbox,
  type RecordedTrim,
  readOutbox,
  replaceInOutbox,
  takeFromOutbox,
  type Waiting,
} from './outbox.ts'
import { overrideBody } from './trim-body.ts'

export type Sent =
  /** `overrideRefused`: the trim stands, its override was not taken. */
  | { is: 'recorded'; trim: RecordedTrim; overrideRefused: OgeeError | null }
  | { is: 'waiting'; error: unknown }
  | { is: 'refused'; error: OgeeError }

/** Keys that a form of this page is sending itself. */
const underWay = new Set<string>()

/** Keeps the record here, then sends it. The one way in which Bench records. */
export async function recordOrKeep(item: Waiting): Promise<Sent> {
  const isKept = putInOutbox(item)
  underWay.add(item.key)
  const sent = await sendOne(item).finally(() => underWay.delete(item.key))
  if (sent.is === 'waiting' && !isKept) {
    takeFromOutbox(item.key)
    const message = 'The server does not answer and this browser keeps nothing. The record is not saved.'
    return { is: 'refused', error: new OgeeError('server-unreachable', message) }
  }
  // At its own form a refusal is shown at its fields; it needs no place among the waiting.
  if (sent.is === 'refused') takeFromOutbox(item.key)
  return sent
}

/** Sends what this person has waiting, oldest first; stops at the first that the server does not answer. */
export async function sendWaiting(
  person: string,
  onSent: (item: Waiting, sent: Sent) => void,
): Promise<void> {
  const locks = typeof navigator === 'undefined' ? undefined : navigator.locks
  const send = async () => {
    for (const item of readOutbox()) {
      if (item.person !== person || item.refused !== null || underWay.has(item.key)) continue
      const sent = await sendOne(item)
      settle(item, sent)
      onSent(item, sent)
      if (sent.is === 'waiting') return
    }
  }
  // Two tabs would do no harm (the key is the same), but one is enough.
  if (locks) await locks.request('ogee-outbox', { ifAvailable: true }, (lock) => (lock ? send() : undefined))
  else await send()
}

/** The draft learns the end of its record, wherever the person is by now. */
function settle(item: Waiting, sent: Sent): void {
  if (sent.is === 'waiting') return
  const draft = readDraft(item.draft)
  if (sent.is === 'refused') {
    const { code, message, errors } = sent.error
    replaceInOutbox(item.key, { ...item, refused: { code, message, errors } })
    if (draft) writeDraft(item.draft, { ...draft, status: { is: 'open' } })
    return
  }
  if (draft) writeDraft(item.draft, { ...draft, status: { is: 'recorded', ...sent.trim } })
}

async function sendOne(item: Waiting): Promise<Sent> {
  let trim = item.done
  try {
    const { id, number, recordedAt, accepted, kind } = await api(postTrim, {
      body: item.body,
      idempotencyKey: item.key,
    })
    if (trim) {
      takeFromOutbox(item.key)
      return { is: 'recorded', trim: { ...trim, accepted: true }, overrideRefused: null }
    }
    trim = { id, number, recordedAt, accepted, kind: kind === 'verify' ? 'verify' : 'trim' }
  } catch (error) {
    // No answer, or one cut short: what the server did is not known, so the same request goes again.
    if (!isOgeeError(error) || comesBack(error)) return { is: 'waiting', error }
    if (!trim) return { is: 'refused', error }
    takeFromOutbox(item.key)
    return { is: 'recorded', trim, overrideRefused: error }
  }
  if (item.override === null) {
    takeFromOutbox(item.key)
    return { is: 'recorded', trim, overrideRefused: null }
  }
  const { key, reason } = item.override
  const next = { ...item, key, body: overrideBody(item.body, trim.id, reason), override: null, done: trim }
  replaceInOutbox(item.key, next)
  return sendOne(next)
}

/** Outages, and an ended session: the same request again will do. */
function comesBack(error: OgeeError): boolean {
  return errorTable[error.code].retry || isOgeeError(error, 'sign-in-required')
}
