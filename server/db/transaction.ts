import { setTimeout as wait } from 'node:timers/promises'
import type { Database } from './connection.ts'
import { failureOf } from './failure.ts'
import { type Sql, sqlOver } from './sql.ts'

export type Rerun = {
  /**
   * The work may run again although its COMMIT may have taken effect: true only where a row that it inserts (an
   * idempotency key) lets the second run find the first.
   */
  afterLostCommit: boolean
}

const tries = 6

/**
 * Runs work in one READ COMMITTED transaction, whole or not at all, and whole again when it met somebody else's:
 * deadlock, lock wait, certification failure, node not ready, lost connection, COMMIT included.
 * Guarantee: what `work` did is committed exactly when this resolves; on rejection with anything but a lost COMMIT it is not.
 * Work must be pure but for its `sql`: it can run several times.
 */
export async function transaction<T>(
  database: Database,
  work: (sql: Sql) => Promise<T>,
  rerun: Rerun = { afterLostCommit: false },
): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    const outcome = await attemptOnce(database, work)
    if (outcome.done) return outcome.value
    if (attempt >= tries || !mayRunAgain(outcome, rerun)) throw outcome.error
    // Two that met need different pauses, or they meet again. Jitter is no data: nothing depends on its value.
    await wait(attempt * attempt * (2 + Math.random() * 6))
  }
}

type Outcome<T> = { done: true; value: T } | { done: false; error: unknown; committing: boolean }

async function attemptOnce<T>(database: Database, work: (sql: Sql) => Promise<T>): Promise<Outcome<T>> {
  let committing = false
  try {
    const open = await database.sequelize.transaction()
    let value: T
    try {
      value = await work(sqlOver(database.sequelize, open))
      committing = true
      await open.commit()
    } catch (error) {
      // A deadlock has rolled back already, and a lost connection cannot: neither is news.
      if (!committing) await open.rollback().catch(() => undefined)
      throw error
    }
    return { done: true, value }
  } catch (error) {
    return { done: false, error, committing }
  }
}

function mayRunAgain(outcome: { error: unknown; committing: boolean }, rerun: Rerun): boolean {
  switch (failureOf(outcome.error)) {
    case 'conflict':
    case 'lock-wait':
      return true
    case 'lost':
      return !outcome.committing || rerun.afterLostCommit
    default:
      return false
  }
}
