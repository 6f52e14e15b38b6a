import { v7 as uuid } from 'uuid'
import type { Role } from '../../shared/contract/primitives.ts'
import type { Sql } from '../db/sql.ts'
import type { PersonPrincipal } from '../http/principal.ts'
import { insertLeaves, newLeaf } from '../ledger/leaves.ts'
import type { Models } from '../models/define-models.ts'
import { foldEmail } from '../models/person.ts'

type NewPerson = { name: string; email: string; role: Role; passwordHash: string; at: Date; by: string }

/** Enters a person within the caller's transaction. Guarantee: the person exists exactly when the `role` leaf does. */
export async function createPerson(models: Models, sql: Sql, asked: NewPerson): Promise<PersonPrincipal> {
  const { name, email, role, passwordHash, at, by } = asked
  const id = uuid()
  await models.people.create(
    { id, name, email, emailFolded: foldEmail(email), role, passwordHash, createdAt: at, disabledAt: null },
    sql.within,
  )
  // The address stays out of the ledger, which forgets nothing.
  const body = { format: 'ogee.role/1', person: id, name, role, before: null, by }
  await insertLeaves(sql, [newLeaf('role', at.toISOString(), body)])
  return { kind: 'person', id, name, email, role }
}
