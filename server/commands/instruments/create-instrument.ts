import { UniqueConstraintError } from 'sequelize'
import type { InstrumentFacts } from '../../../shared/contract/instruments.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Deps } from '../../http/deps.ts'
import type { InstrumentRow } from '../../models/instrument.ts'

/** Adds an instrument. Guarantee: no two, retired ones included, ever have the same id, because records name it. */
export async function createInstrument(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  facts: InstrumentFacts,
  by: string,
): Promise<InstrumentRow> {
  const at = now()
  const row = { ...facts, version: 1, createdAt: at, changedAt: at, changedBy: by, retiredAt: null }
  await database.models.instruments.create(row).catch((error: unknown) => {
    throw error instanceof UniqueConstraintError ? idTaken(facts.id) : error
  })
  return row
}

const idTaken = (id: string) =>
  new OgeeError('already-exists', `There is an instrument ${id} already; choose another id.`, {
    errors: [{ path: '/id', message: 'This id is taken.' }],
  })
