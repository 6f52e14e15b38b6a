import { OgeeError } from '../../shared/errors.ts'
import type { Database } from '../db/connection.ts'
import { plain } from '../models/table.ts'

const firstFew = 5

/** The same refusal with the names of those who could change it, so that a person knows whom to ask. */
export async function nameAdministrators(
  { models }: Pick<Database, 'models'>,
  { code, message, facts }: OgeeError,
): Promise<OgeeError> {
  const people = plain(
    await models.people.findAll({
      where: { role: 'administrator', disabledAt: null },
      order: ['name'],
      limit: firstFew,
    }),
  )
  const administrators = people.map(({ name }) => name).join(', ')
  return new OgeeError(code, message, { facts: { ...facts, administrators } })
}
