import type { LotPlace } from '../../../shared/contract/lot-standing.ts'
import type { LotUnit } from '../../../shared/contract/lots.ts'
import type { RecordBody } from '../../../shared/contract/record.ts'
import type { Sql } from '../../db/sql.ts'
import { type Board, changedUnits, demandedBy, grouped, placeKey, unitStanding } from './board.ts'
import { type LotHead, readReferences } from './find-lot.ts'
import { type Judged, type PlaceStanding, standingOf } from './standing.ts'

type Row = Judged & {
  number: number
  unitId: number
  unit: string
  channel: string
  range: string
  gainErrorPpm: number | null
  offsetErrorV: number | null
  gainCode: number | null
  offsetCode: number | null
  worstLsb: number | null
  station: string | null
  measuredAt: Date | null
  recordedAt: Date
  leafId: number
}
type Stands = PlaceStanding<Row>

const columns = `id, number, kind, follows, pass, verdict, unit_id AS unitId, unit, channel, range_id AS \`range\`,
  gain_error_ppm AS gainErrorPpm, offset_error_v AS offsetErrorV, gain_code AS gainCode, offset_code AS offsetCode,
  worst_lsb AS worstLsb, station, measured_at AS measuredAt, recorded_at AS recordedAt, leaf_id AS leafId`

type Asked = { after?: string | undefined; since?: number | undefined; limit: number }

/** Units of a lot in the order in which they came to be, by keyset; with `since` only those that changed. */
export async function readLotUnits(
  sql: Sql,
  head: LotHead,
  board: Board,
  { after, since, limit }: Asked,
): Promise<{ items: LotUnit[]; next: string | null; newest: number; records: number }> {
  const from = after === undefined ? 0 : /^\d{1,15}$/.test(after) ? Number(after) : 0
  const ids = (await changedUnits(sql, head, since ?? 0)).filter((id) => id > from)
  const page = ids.slice(0, limit)
  const references = await readReferences(sql, head.designId)
  const demanded = demandedBy(board, new Set(references.keys()))
  const rows = page.length === 0 ? [] : await readRows(sql, head, page)
  const units = grouped(rows, ({ unitId }) => unitId)
  const stands = new Map([...units].map(([id, ofUnit]) => [id, placesOf(ofUnit)]))
  const bodies = await readBodies(sql, [...stands.values()].flat())
  const expected = new Set(board.expected)
  const items = [...stands].map(([id, places]): LotUnit => {
    const ofUnit = units.get(id)!
    const byPlace = new Map(places.map(({ key, stands }) => [key, stands.standing]))
    const serial = ofUnit[0]!.unit
    return {
      unit: serial,
      reference: references.has(id),
      expected: expected.has(serial),
      standing: unitStanding(byPlace, references.has(id) ? new Set() : demanded),
      records: ofUnit.length,
      places: places.map((place) => placeReply(place, bodies)),
    }
  })
  return {
    items,
    next: ids.length > limit ? String(page.at(-1)) : null,
    newest: head.newest,
    records: head.records,
  }
}

function readRows(sql: Sql, head: LotHead, ids: readonly number[]): Promise<Row[]> {
  return sql.rows<Row>(
    `SELECT ${columns} FROM records WHERE design = ? AND lot = ? AND unit_id IN (?)
      ORDER BY unit_id, recorded_at, id`,
    [head.design, head.key, ids],
  )
}

type Place = { key: string; channel: string; range: string; stands: Stands }

function placesOf(rows: readonly Row[]): Place[] {
  return [...grouped(rows, placeKey)].flatMap(([key, ofPlace]) => {
    const stands = standingOf(ofPlace)
    const { channel, range } = ofPlace[0]!
    return stands ? [{ key, channel, range, stands }] : []
  })
}

/** What the list's columns do not hold is read only of what needs a look. */
async function readBodies(sql: Sql, places: readonly Place[]): Promise<Map<number, RecordBody>> {
  const ids = places.flatMap(({ stands }) => stands.attention?.leafId ?? [])
  if (ids.length === 0) return new Map()
  const rows = await sql.rows<{ id: number; body: Buffer }>(
    'SELECT id, body FROM ledger_leaves WHERE id IN (?)',
    [ids],
  )
  return new Map(rows.map(({ id, body }) => [id, JSON.parse(body.toString('utf8')) as RecordBody]))
}

const saidBy = ({ id, station, measuredAt, recordedAt }: Row) => ({
  record: id,
  station,
  at: (measuredAt ?? recordedAt).toISOString(),
})

function placeReply({ channel, range, stands }: Place, bodies: ReadonlyMap<number, RecordBody>): LotPlace {
  const { standing, pass, found, codes, left, attention } = stands
  return {
    channel,
    range,
    standing,
    pass,
    found:
      found === null || found.gainErrorPpm === null || found.offsetErrorV === null
        ? null
        : {
            ...saidBy(found),
            gainErrorPpm: found.gainErrorPpm,
            offsetErrorV: found.offsetErrorV,
            verdict: found.verdict as 'ok',
          },
    codes: codes === null ? null : codesReply(codes),
    left:
      left === null || left.worstLsb === null
        ? null
        : { ...saidBy(left), worstLsb: left.worstLsb, outcome: left.verdict as 'pass' },
    attention: attention === null ? null : attentionReply(attention, bodies.get(attention.leafId)),
  }
}

function codesReply(row: Row): LotPlace['codes'] {
  return {
    ...saidBy(row),
    number: row.number,
    ...(row.gainCode === null ? {} : { gain: row.gainCode }),
    ...(row.offsetCode === null ? {} : { offset: row.offsetCode }),
  }
}

function attentionReply(row: Row, body: RecordBody | undefined): LotPlace['attention'] {
  const result = body?.result
  return {
    ...saidBy(row),
    verdict: row.verdict as 'ok',
    flags: (result?.fit?.flags ?? []).map(({ flag, code }) => ({ flag, code })),
    reachUsed: result?.format === 'ogee.codes/1' ? result.trim.reachUsed : {},
    worstLsb: row.worstLsb,
  }
}
