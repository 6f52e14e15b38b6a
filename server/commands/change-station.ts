import { UniqueConstraintError } from 'sequelize'
import { OgeeError } from '../../shared/errors.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import type { StationRow } from '../models/station.ts'
import { nameTaken } from './create-station.ts'

/**
 * Renames or retires a station. Records keep the name they were made under.
 * Guarantee: a retired station's tokens end with it, because a token is good only while its station is.
 */
export async function changeStation(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  id: string,
  change: { name?: string | undefined; retired?: true | undefined },
): Promise<StationRow> {
  return transaction(database, async (sql) => {
    const found = await database.models.stations.findByPk(id, { ...sql.within, lock: true })
    if (!found) throw new OgeeError('not-found', 'There is no such station.')
    const row = found.get()
    if (row.retiredAt !== null) {
      throw new OgeeError(
        'station-retired',
        `Station ${row.name} is retired; a retired station stays as it is.`,
      )
    }
    const changed = {
      ...row,
      name: change.name ?? row.name,
      retiredAt: change.retired ? now() : row.retiredAt,
    }
    await found.update(changed, sql.within).catch((error: unknown) => {
      throw error instanceof UniqueConstraintError ? nameTaken(changed.name) : error
    })
    return changed
  })
}
