import { v7 as uuid } from 'uuid'
import { OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import type { Sql } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import type { Signer } from '../ledger/signer.ts'
import { share } from './coalesce.ts'
import { decideAll } from './recording/decide-all.ts'
import type { Job, Outcome } from './recording/job.ts'
import { findKeys, KeyHeld, KeyJustUsed, keyOf, takeKeys } from './recording/keys.ts'
import { readStored } from './recording/read-stored.ts'
import type { RecordNumbers } from './recording/record-numbers.ts'
import { makeReady, storeRecords } from './recording/store.ts'
import { UnitJustMade } from './recording/units.ts'

export type RecordingDeps = {
  database: Database
  signer: Signer
  now: () => Date
  numbers: RecordNumbers
  notifyLedger: () => void
}

/** Which requests cannot be recorded, found out when the transaction had begun: it is rolled back and run without them. */
class Refused extends Error {
  readonly refusals: ReadonlyMap<Job, Error>
  constructor(refusals: ReadonlyMap<Job, Error>) {
    super('Some requests are refused.')
    this.refusals = refusals
  }
}

const looks = 5

/**
 * Records requests that arrived together in one transaction, and says of each what became of it.
 * Guarantee: each request is recorded whole, with its leaf, its receipt and its unit's codes, or not at all; once for its
 * idempotency key, whatever is repeated, killed or lost; one that is refused takes no other with it.
 */
export async function recordTrims(deps: RecordingDeps, jobs: readonly Job[]): Promise<Outcome[]> {
  const outcomes = new Map<Job, Outcome>()
  let open = [...jobs]
  for (let look = 1; open.length > 0; look++) {
    try {
      const numbers = await deps.numbers.take(open.length)
      const done = await transaction(deps.database, (sql) => attempt(deps, sql, open, numbers), {
        afterLostCommit: true,
      })
      for (const [job, outcome] of done) outcomes.set(job, outcome)
      deps.notifyLedger()
      break
    } catch (error) {
      if (error instanceof Refused) {
        for (const [job, refusal] of error.refusals) outcomes.set(job, { done: false, error: refusal })
        open = open.filter((job) => !outcomes.has(job))
      } else if (error instanceof KeyHeld && open.length > 1) {
        // Which key is held is not known; each request by itself finds out.
        for (const job of open) outcomes.set(job, (await recordTrims(deps, [job]))[0]!)
        break
      } else if (!isWorthALook(error) || look >= looks) {
        for (const job of open) outcomes.set(job, { done: false, error: asReply(error) })
        break
      }
    }
  }
  return jobs.map((job) => outcomes.get(job)!)
}

async function attempt(
  deps: RecordingDeps,
  sql: Sql,
  jobs: readonly Job[],
  numbers: readonly number[],
): Promise<Map<Job, Outcome>> {
  const at = deps.now()
  const ids = new Map(
    jobs.map((job, i) => [job, uuid({ msecs: (job.at ?? at).getTime(), seq: sequence(i) })]),
  )
  const { fresh, outcomes } = await separate(sql, jobs, ids)
  if (fresh.length === 0) return outcomes
  const { decisions, refusals, places } = await decideAll(sql, fresh, {
    ids: fresh.map((job) => ids.get(job)!),
    numbers,
    at,
  })
  if (refusals.size > 0) throw new Refused(refusals)
  const ready = decisions.map((decision) => makeReady(decision, deps.signer))
  await storeRecords(sql, ready, places)
  for (const { decision, stored } of ready) {
    outcomes.set(decision.context.job, { done: true, record: stored, replayed: false })
  }
  return outcomes
}

/** Takes the keys of all; only when one was used before are they looked up, and replays told from new requests. */
async function separate(
  sql: Sql,
  jobs: readonly Job[],
  ids: ReadonlyMap<Job, string>,
): Promise<{ fresh: readonly Job[]; outcomes: Map<Job, Outcome> }> {
  try {
    await takeKeys(sql, jobs, ids)
    return { fresh: jobs, outcomes: new Map() }
  } catch (error) {
    if (!(error instanceof KeyJustUsed)) throw error
  }
  const used = await findKeys(sql, jobs)
  const fresh = jobs.filter((job) => !used.has(keyOf(job)))
  const replays = jobs.filter((job) => used.has(keyOf(job)))
  if (fresh.length > 0) await takeKeys(sql, fresh, ids)
  return { fresh, outcomes: await replay(sql, replays, used) }
}

async function replay(
  sql: Sql,
  jobs: readonly Job[],
  used: Awaited<ReturnType<typeof findKeys>>,
): Promise<Map<Job, Outcome>> {
  const stored = await readStored(
    sql,
    jobs.map((job) => used.get(keyOf(job))!.recordId),
  )
  return new Map(
    jobs.map((job): [Job, Outcome] => {
      const { bodyHash, recordId } = used.get(keyOf(job))!
      if (!bodyHash.equals(job.bodyHash)) return [job, { done: false, error: keyReused() }]
      return [job, { done: true, record: stored.get(recordId)!, replayed: true }]
    }),
  )
}

let counter = 0
/** Ids of one millisecond sort in the order in which they were made; the counter starts over long before it overflows. */
function sequence(i: number): number {
  if (i === 0) counter = (counter + 1) % 0x7f_ff_ff
  return counter * share.requests + Math.min(i, share.requests - 1)
}

function keyReused(): OgeeError {
  return new OgeeError(
    'idempotency-key-reused',
    'This idempotency key was used with another body. Use a new key for a new measurement.',
  )
}

/** Somebody else was a moment ahead with the same key or unit; they have committed, so looking again settles it. */
const isWorthALook = (error: unknown) => error instanceof KeyJustUsed || error instanceof UnitJustMade

function asReply(error: unknown): Error {
  if (error instanceof KeyHeld || isWorthALook(error)) return inFlight()
  return error instanceof Error ? error : new Error(String(error))
}

export function inFlight(): OgeeError {
  return new OgeeError(
    'idempotency-in-flight',
    'The same request is still being worked on. Ask again in a second.',
    {
      facts: { retryAfterSeconds: 1 },
    },
  )
}
