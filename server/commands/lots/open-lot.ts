import { OgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { type Sql, sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import type { RevisionState } from '../../models/design.ts'
import { type LotHead, lockLot } from './find-lot.ts'
import { requireOpen, stateWords, wrongState } from './lot-rules.ts'

type Asked = {
  design: string
  key: string
  revision: number | 'released'
  expected?: readonly string[] | undefined
  by: string
}

/**
 * Opens a lot of a released revision.
 * Guarantee: the lot and the serials that it expects are stored together or not at all; opening it again with what it has
 * changes nothing; it keeps its revision,
 * also when another one has been released since.
 */
export async function openLot(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  asked: Asked,
): Promise<LotHead> {
  const { design, key, by, expected = [] } = asked
  return transaction(database, async (sql) => {
    const { designId, number } = await requireRevision(sql, asked)
    await sql.run(
      `INSERT INTO lots (design_id, lot_key, revision, state, created_at, opened_by) VALUES ?
        ON DUPLICATE KEY UPDATE state = lots.state`,
      [[[designId, key, number, 'open', sqlTime(now()), by]]],
    )
    const lot = await lockLot(sql, { design, lot: key })
    if (lot.state !== 'open') {
      throw wrongState(
        `Lot ${key} is ${stateWords[lot.state]}, and is never open again. Open another one.`,
        lot.state,
      )
    }
    if (lot.revision !== number && asked.revision !== 'released') {
      throw new OgeeError(
        'already-exists',
        `There is a lot ${key} of ${design} already, of revision ${lot.revision}.`,
        { errors: [{ path: '/key', message: `It stands under revision ${lot.revision}.` }] },
      )
    }
    if (expected.length > 0) await expectSerials(sql, lot, expected)
    return lockLot(sql, { design, lot: key })
  })
}

/** Adds serials to those that an open lot expects. Guarantee: all of them or none; those it has are no trouble. */
export async function expectUnits(
  { database }: Pick<Deps, 'database'>,
  asked: { design: string; lot: string; serials: readonly string[] },
): Promise<LotHead> {
  return transaction(database, async (sql) => {
    const lot = await lockLot(sql, asked)
    await expectSerials(sql, lot, asked.serials)
    return lockLot(sql, asked)
  })
}

/** Under the lock of the lot's row, so that what is missing is known exactly. */
async function expectSerials(sql: Sql, lot: LotHead, serials: readonly string[]): Promise<void> {
  const there = await sql.rows<{ serial: string }>('SELECT serial FROM lot_expected WHERE lot_id = ?', [
    lot.id,
  ])
  const known = new Set(there.map(({ serial }) => serial))
  const added = [...new Set(serials)].filter((serial) => !known.has(serial))
  if (added.length === 0) return
  requireOpen(lot)
  if (known.size + added.length > limits.lotExpectedMax) {
    throw new OgeeError(
      'lot-expected-full',
      `A lot expects at most ${limits.lotExpectedMax} units; ${lot.key} expects ${known.size} already.`,
    )
  }
  const block = 1_000
  for (let at = 0; at < added.length; at += block) {
    const rows = added.slice(at, at + block).map((serial) => [lot.id, serial])
    await sql.run('INSERT INTO lot_expected (lot_id, serial) VALUES ?', [rows])
  }
}

type Revision = { designId: number; number: number; state: RevisionState }

async function requireRevision(sql: Sql, { design, revision }: Asked): Promise<Revision> {
  const rows = await sql.rows<Revision>(
    `SELECT r.design_id AS designId, r.number, r.state FROM revisions r JOIN designs d ON d.id = r.design_id
      WHERE d.design_key = ? ORDER BY r.number DESC`,
    [design],
  )
  if (rows.length === 0) {
    throw new OgeeError('not-found', `There is no design ${design}, or it is not open to you.`)
  }
  const found =
    revision === 'released'
      ? rows.find(({ state }) => state === 'released')
      : rows.find(({ number }) => number === revision)
  if (found?.state === 'released') return found
  const which = revision === 'released' ? 'any revision' : `revision ${revision}`
  const [code, message] =
    found?.state === 'withdrawn'
      ? ([
          'revision-withdrawn',
          `${which} of ${design} was withdrawn: open the lot under a released one.`,
        ] as const)
      : (['revision-not-released', `Design ${design} has not released ${which}.`] as const)
  throw new OgeeError(code, message[0]!.toUpperCase() + message.slice(1), {
    errors: [{ path: '/revision', message: found?.state === 'withdrawn' ? 'Withdrawn.' : 'Not released.' }],
  })
}
