import type { RecordBody } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Sql } from '../../db/sql.ts'
import type { Place, PlaceState } from './place.ts'

/** A record that another one may follow. */
export type Followed = {
  body: RecordBody
  unitId: number
  overridden: boolean
  withdrawn: boolean
}

/** Records by id, those of the transaction itself included. */
export type Known = Map<string, Followed>

export async function readFollowed(sql: Sql, ids: readonly string[]): Promise<Known> {
  const wanted = [...new Set(ids)]
  if (wanted.length === 0) return new Map()
  const rows = await sql.rows<{ id: string; unitId: number; body: Buffer }>(
    `SELECT r.id, r.unit_id AS unitId, l.body FROM records r JOIN ledger_leaves l ON l.id = r.leaf_id
      WHERE r.id IN (?)`,
    [wanted],
  )
  const answers = await sql.rows<{ follows: string; kind: string }>(
    // A withdrawn override says nothing any more; a withdrawal cannot be withdrawn.
    `SELECT a.follows, a.kind FROM records a WHERE a.follows IN (?) AND a.kind IN ('override', 'withdraw')
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = a.id AND w.kind = 'withdraw')`,
    [wanted],
  )
  const has = (id: string, kind: string) =>
    answers.some((answer) => answer.follows === id && answer.kind === kind)
  return new Map(
    rows.map((row) => [
      row.id,
      {
        body: JSON.parse(row.body.toString('utf8')) as RecordBody,
        unitId: row.unitId,
        overridden: has(row.id, 'override'),
        withdrawn: has(row.id, 'withdraw'),
      },
    ]),
  )
}

const mostBefore = 8

/** The records before verifications, down to a trim: what effects are learned from when a verification is followed. */
export async function readBefore(sql: Sql, known: Known): Promise<void> {
  for (let step = 0; step < mostBefore; step++) {
    const missing = [...known.values()].flatMap(({ body: { kind, follows } }) =>
      kind === 'verify' && follows !== null && !known.has(follows) ? follows : [],
    )
    if (missing.length === 0) return
    const found = await readFollowed(sql, missing)
    if (found.size === 0) return
    for (const [id, record] of found) known.set(id, record)
  }
}

/** The record meant by `follows`, which must be of the same unit, channel and range. */
export function followedBy(follows: string, known: Known, state: PlaceState, place: Place): Followed {
  const id = follows === 'last' ? state.measurement : follows
  const found = id === null ? undefined : known.get(id)
  if (
    !found ||
    found.unitId !== place.unitId ||
    found.body.channel !== place.channel ||
    found.body.range !== place.range
  ) {
    throw followsUnknown(
      follows === 'last'
        ? `There is no measurement of channel ${place.channel} and range ${place.range} of this unit yet.`
        : 'There is no such record of this unit, channel and range.',
    )
  }
  return found
}

/** The same for a measurement, which goes on from another measurement. */
export function measurementBefore(follows: string, known: Known, state: PlaceState, place: Place): Followed {
  const found = followedBy(follows, known, state, place)
  if (found.withdrawn) throw followsUnknown(`Record ${found.body.number} was withdrawn.`)
  if (found.body.result === null) {
    throw followsUnknown(
      `Record ${found.body.number} is of kind ${found.body.kind}: follow the measurement itself.`,
    )
  }
  return found
}

function followsUnknown(message: string): OgeeError {
  return new OgeeError('follows-unknown', message, { errors: [{ path: '/follows', message }] })
}
