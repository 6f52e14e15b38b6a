import { ConnectionError, UniqueConstraintError } from 'sequelize'
import { OgeeError } from '../../shared/errors.ts'

/** What went wrong below us, as far as anything depends on it. */
export type Failure = 'duplicate' | 'lock-wait' | 'too-long' | 'conflict' | 'lost' | 'unavailable' | 'other'

const duplicateKey = 1062
const lockWait = 1205
/** Longer than the statement itself allowed. */
const statementTime = 1969
/** Deadlock; record changed since last read (snapshot and Galera); node not ready (Galera). */
const conflicts = new Set([1213, 1020, 1047])
/** Server gone, shutting down, connection killed; the connector's own codes for a socket that closed. */
const lost = new Set([1053, 1927, 2006, 2013, 4031, 45009, 45013, 45025, 45026, 45027, 45038, 45039])
/** Too many connections, access while starting. */
const unavailable = new Set([1040, 1203, 1226, 1021, 1114])

export function failureOf(error: unknown): Failure {
  if (error instanceof UniqueConstraintError) return 'duplicate'
  if (error instanceof ConnectionError) return 'unavailable'
  const cause = causeOf(error)
  if (cause.errno === duplicateKey) return 'duplicate'
  if (cause.errno === lockWait) return 'lock-wait'
  if (cause.errno === statementTime) return 'too-long'
  if (conflicts.has(cause.errno)) return 'conflict'
  if (unavailable.has(cause.errno)) return 'unavailable'
  if (lost.has(cause.errno) || cause.fatal || isSocketCode(cause.code)) return 'lost'
  return 'other'
}

/** Turns every failure of the database that the caller may try again into the one outage; leaves the rest alone. */
export function asOutage(error: unknown): unknown {
  const failure = failureOf(error)
  if (failure === 'other' || failure === 'duplicate') return error
  return new OgeeError('database-unavailable', 'The database does not answer. Try again in a moment.', {
    cause: error,
    facts: { retryAfterSeconds: 1 },
  })
}

function causeOf(error: unknown): { errno: number; code: string; fatal: boolean } {
  const outer = error as { parent?: unknown; errno?: unknown } | null
  const inner = (outer?.parent ?? outer) as { errno?: unknown; code?: unknown; fatal?: unknown } | null
  return {
    errno: typeof inner?.errno === 'number' ? inner.errno : 0,
    code: typeof inner?.code === 'string' ? inner.code : '',
    fatal: inner?.fatal === true,
  }
}

function isSocketCode(code: string): boolean {
  return (
    /^(ECONNRESET|EPIPE|ETIMEDOUT|ECONNREFUSED|ENOTFOUND|EHOSTUNREACH)$/.test(code) ||
    /^ER_(SOCKET|CMD_CONNECTION_CLOSED|CONNECTION_TIMEOUT|CMD_NOT_EXECUTED)/.test(code)
  )
}
