import type { InstrumentChange } from '../../../shared/contract/instruments.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { factsOf, type InstrumentRow, instrumentEtag } from '../../models/instrument.ts'

type Asked = { id: string; change: InstrumentChange; by: string; ifMatch: string }

/**
 * Changes or retires an instrument. Records keep what was true when they were made.
 * Guarantee: of two who saw the same state one changes it and the other hears who did; what is there already is no
 * change, so that a retry after a lost answer does no harm.
 */
export async function changeInstrument(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  { id, change, by, ifMatch }: Asked,
): Promise<InstrumentRow> {
  return transaction(database, async (sql) => {
    const found = await database.models.instruments.findByPk(id, { ...sql.within, lock: true })
    if (!found) throw new OgeeError('not-found', `There is no instrument ${id}.`)
    const row = found.get()
    const { retired, ...facts } = change
    const wanted = factsOf({ ...row, ...present(facts) })
    const isSame = JSON.stringify(wanted) === JSON.stringify(factsOf(row))
    if (isSame && (!retired || row.retiredAt !== null)) return row
    if (row.retiredAt !== null) {
      const message = `Instrument ${id} is retired; a retired instrument stays as it is.`
      throw new OgeeError('instrument-retired', message)
    }
    requireMatch(row, ifMatch)
    if (wanted.dueOn < wanted.calibratedOn) {
      const message = 'Due lies before the calibration.'
      throw new OgeeError('invalid-request', message, { errors: [{ path: '/dueOn', message }] })
    }
    const at = now()
    const changed: InstrumentRow = {
      ...row,
      ...wanted,
      version: row.version + 1,
      changedAt: at,
      changedBy: by,
      retiredAt: retired ? at : null,
    }
    await found.update(changed, sql.within)
    return changed
  })
}

type Present<T> = { [K in keyof T]?: Exclude<T[K], undefined> }

function present<T extends object>(values: T): Present<T> {
  return Object.fromEntries(Object.entries(values).filter(([, value]) => value !== undefined)) as Present<T>
}

function requireMatch(row: InstrumentRow, ifMatch: string): void {
  const etag = instrumentEtag(row)
  if (ifMatch.trim() === '*' || ifMatch.split(',').some((one) => one.trim() === etag)) return
  const at = `${row.changedAt.toISOString().slice(0, 19)}Z`
  throw new OgeeError(
    'precondition-failed',
    `${row.changedBy} changed instrument ${row.id} at ${at}, after you opened it. Look at it again, then change it.`,
    { facts: { etag, by: row.changedBy, at } },
  )
}
