import type { Logger } from 'pino'
import { isOgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import { requireInForce } from './keys.ts'
import { type PassResult, sequencePass } from './sequence.ts'
import type { Signer } from './signer.ts'

/** Leaves of other servers, and of those that died, are found by looking. Milliseconds. */
const pollMs = 250
/** Records that arrive together share a pass; while more and more arrive, passes start no closer than this. Milliseconds. */
const gatherMs = 20
const apartMs = 100
const afterFailureMs = 1_000

export type Sequencer = {
  /** Something was recorded: a pass follows soon. */
  notify: () => void
  /** Runs passes until nothing is pending. */
  drain: () => Promise<void>
  stop: () => Promise<void>
}

/** What else is done about a pass, where a server does more than give places. */
export type Aside = {
  /** A checkpoint was signed and committed. */
  onCheckpoint?: (note: string) => Promise<void>
  /** The key was replaced elsewhere: take up the new one, which ends the signer's fault. */
  reload?: () => Promise<void>
}

/** Runs passes one after another: soon after each notice, and now and then without one. */
export function startSequencer(
  database: Database,
  signer: Signer,
  now: () => Date,
  logger: Logger,
  { onCheckpoint, reload }: Aside = {},
): Sequencer {
  let timer: NodeJS.Timeout | undefined
  let dueAt = Number.POSITIVE_INFINITY
  let startedAt = Number.NEGATIVE_INFINITY
  let running: Promise<unknown> = Promise.resolve()
  let stopped = false

  const schedule = (ms: number) => {
    const at = Date.now() + ms
    if (stopped || at >= dueAt) return
    clearTimeout(timer)
    dueAt = at
    timer = setTimeout(() => {
      dueAt = Number.POSITIVE_INFINITY
      startedAt = Date.now()
      running = onePass()
    }, ms)
  }
  const onePass = async () => {
    try {
      // At each pass and not only where one signs: receipts are signed all the time, and another server may sign the checkpoints.
      await requireInForce(database.sql, signer)
      signer.fault = null
      const { more, note } = await sequencePass(database, signer, now)
      schedule(more ? 0 : pollMs)
      if (note !== null) await onCheckpoint?.(note)
    } catch (error) {
      logger.warn({ err: error }, 'A pass of the ledger failed; the next follows.')
      if (isOgeeError(error, 'ledger-key-differs')) {
        signer.fault = error.message
        await reload?.().catch(() => undefined)
      }
      schedule(afterFailureMs)
    }
  }
  schedule(0)
  return {
    notify: () => schedule(Math.max(gatherMs, startedAt + apartMs - Date.now())),
    drain: async () => {
      await running
      let pass: PassResult
      do pass = await sequencePass(database, signer, now)
      while (pass.more)
    },
    stop: async () => {
      stopped = true
      clearTimeout(timer)
      await running
    },
  }
}
