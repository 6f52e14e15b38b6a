import type { Database } from '../db/connection.ts'
import { within } from '../http/deadline.ts'
import { checkPassword } from '../http/passwords.ts'
import type { PersonPrincipal } from '../http/principal.ts'
import { foldEmail } from '../models/person.ts'

/**
 * Finds the person with that address and password.
 * Guarantee: unknown, disabled and wrong password take the same time and give the same answer, null.
 */
export async function signIn(
  database: Database,
  { email, password }: { email: string; password: string },
): Promise<PersonPrincipal | null> {
  const asked = database.models.people.findOne({ where: { emailFolded: foldEmail(email) } })
  const found = (await within(asked))?.get()
  const person = found?.disabledAt === null ? found : null
  const right = await checkPassword(person?.passwordHash ?? null, password)
  if (!person || !right) return null
  return { kind: 'person', id: person.id, name: person.name, email: person.email, role: person.role }
}
