import type { Finding } from '../../../shared/contract/findings.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { canonicalBytes } from '../../../shared/ledger/canonical.ts'
import { failureOf } from '../../db/failure.ts'
import type { Sql } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { sha256 } from '../../ledger/crypto.ts'
import { readFinding } from './read-findings.ts'

/** Words that somebody wants kept, and the key under which they are kept once. */
export type Writing = { text: string; by: { id: string; name: string }; key: string }

type Steps = {
  /** The finding to answer with. */
  find: (id: string) => string
  insert: (sql: Sql, id: string, text: string) => Promise<void>
  /** Throws when what is stored under the key is something else. */
  repeats: (stored: Finding, id: string) => void
}

/**
 * Inserts words under an id that follows from who writes and their key: a repeat meets its own row, and no further table is
 * needed to know it.
 */
export async function writeOnce(
  { database, notifyLedger }: Pick<Deps, 'database' | 'notifyLedger'>,
  { text, by, key }: Writing,
  { find, insert, repeats }: Steps,
): Promise<Finding> {
  const id = idOf(by.id, key)
  const write = async (): Promise<'written' | 'there'> => {
    const stored = await readFinding(database.sql, find(id))
    if (stored && (stored.id === id || stored.answers.some((answer) => answer.id === id))) return 'there'
    try {
      await transaction(database, (sql) => insert(sql, id, text.trim()), { afterLostCommit: true })
      return 'written'
    } catch (error) {
      if (failureOf(error) === 'duplicate') return 'there'
      throw error
    }
  }
  const outcome = await write()
  const finding = await readFinding(database.sql, find(id))
  // The key stands under another finding: its words are not these.
  if (!finding) throw reused()
  if (outcome === 'there') repeats(finding, id)
  notifyLedger()
  return finding
}

/** A UUID of version 8 (RFC 9562) from a hash. */
function idOf(person: string, key: string): string {
  const hex = Buffer.from(sha256(canonicalBytes(['finding', person, key]))).toString('hex')
  const variant = '89ab'[Number.parseInt(hex[16]!, 16) % 4]
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${variant}${hex.slice(17, 20)}-${hex.slice(20, 32)}`
}

export function requireSame(isSame: boolean): void {
  if (!isSame) throw reused()
}

const reused = () =>
  new OgeeError(
    'idempotency-key-reused',
    'This idempotency key was used with other words. Use a new key for something new.',
  )
