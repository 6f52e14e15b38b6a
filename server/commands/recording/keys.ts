import { failureOf } from '../../db/failure.ts'
import type { Sql } from '../../db/sql.ts'
import type { Job } from './job.ts'

export type FoundKey = { bodyHash: Buffer; recordId: string }

/** Somebody else holds a key of these at this moment, in a transaction that has not ended. */
export class KeyHeld extends Error {}
/** A key of these was used before, or just now by somebody else. */
export class KeyJustUsed extends Error {}

export const keyOf = (job: Pick<Job, 'recorder' | 'key'>) => `${job.recorder.scope} ${job.key}`

/** Which of the keys have been used, by whom they belong to. */
export async function findKeys(sql: Sql, jobs: readonly Job[]): Promise<Map<string, FoundKey>> {
  const rows = await sql.rows<FoundKey & { scope: string; idemKey: string }>(
    `SELECT scope, idem_key AS idemKey, body_hash AS bodyHash, record_id AS recordId FROM idempotency_keys
      WHERE ${jobs.map(() => '(scope = ? AND idem_key = ?)').join(' OR ')}`,
    jobs.flatMap((job) => [job.recorder.scope, job.key]),
  )
  return new Map(rows.map((row) => [`${row.scope} ${row.idemKey}`, row]))
}

/**
 * Takes keys for records to be, in the transaction of their effect. Two seconds of waiting for another's key are enough to
 * know that it is in flight: the caller hears so and asks again.
 */
export async function takeKeys(
  sql: Sql,
  jobs: readonly Job[],
  recordIds: ReadonlyMap<Job, string>,
): Promise<void> {
  const rows = jobs
    .map((job) => [job.recorder.scope, job.key, job.bodyHash, recordIds.get(job)!] as const)
    .sort((a, b) => (`${a[0]} ${a[1]}` < `${b[0]} ${b[1]}` ? -1 : 1))
  try {
    await sql.run(
      `SET STATEMENT innodb_lock_wait_timeout = 2 FOR
        INSERT INTO idempotency_keys (scope, idem_key, body_hash, record_id) VALUES ?`,
      [rows],
    )
  } catch (error) {
    const failure = failureOf(error)
    if (failure === 'duplicate') throw new KeyJustUsed()
    if (failure === 'lock-wait') throw new KeyHeld()
    throw error
  }
}
