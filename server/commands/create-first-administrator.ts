import { OgeeError } from '../../shared/errors.ts'
import type { Sql } from '../db/sql.ts'
import { transaction } from '../db/transaction.ts'
import { within } from '../http/deadline.ts'
import type { Deps } from '../http/deps.ts'
import { hashPassword } from '../http/passwords.ts'
import type { PersonPrincipal } from '../http/principal.ts'
import { lockHead } from '../ledger/sequence.ts'
import { requireGoodPassword } from '../policies/password-rules.ts'
import { createPerson } from './create-person.ts'

/** Open while there is nobody, and never again: people are disabled, not deleted. */
export async function isSetupOpen(sql: Sql): Promise<boolean> {
  const found = await sql.rows('SELECT 1 AS found FROM people LIMIT 1')
  return found.length === 0
}

/**
 * Creates the first administrator.
 * Guarantee: at most one ever comes from set-up, also when two ask at once (the ledger's head row is the lock), and it
 * leaves a `role` leaf.
 */
export async function createFirstAdministrator(
  deps: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: { name: string; email: string; password: string },
): Promise<PersonPrincipal> {
  if (!(await within(isSetupOpen(deps.database.sql)))) throw closed()
  requireGoodPassword(asked.password, asked)
  const passwordHash = await hashPassword(asked.password)
  const entering = transaction(deps.database, async (sql) => {
    await lockHead(sql)
    if (!(await isSetupOpen(sql))) throw closed()
    return createPerson(deps.database.models, sql, {
      name: asked.name,
      email: asked.email,
      role: 'administrator',
      passwordHash,
      at: deps.now(),
      by: 'set-up',
    })
  })
  const person = await within(entering)
  deps.notifyLedger()
  return person
}

const closed = () => new OgeeError('setup-closed', 'Set-up is over: there are people already. Sign in.')
