import { UniqueConstraintError } from 'sequelize'
import { v7 as uuid } from 'uuid'
import { OgeeError } from '../../shared/errors.ts'
import type { Deps } from '../http/deps.ts'
import type { StationRow } from '../models/station.ts'

/** Names a station. Guarantee: no two stations, retired ones included, ever have the same name. */
export async function createStation(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  name: string,
): Promise<StationRow> {
  const row = { id: uuid(), name, createdAt: now(), retiredAt: null }
  await database.models.stations.create(row).catch((error: unknown) => {
    throw error instanceof UniqueConstraintError ? nameTaken(name) : error
  })
  return row
}

export const nameTaken = (name: string) =>
  new OgeeError(
    'already-exists',
    `There is a station ${name} already; records name it, so choose another name.`,
    {
      errors: [{ path: '/name', message: 'This name is taken.' }],
    },
  )
