import type { Standing } from '../../../shared/contract/lot-standing.ts'
import type { Sql } from '../../db/sql.ts'
import type { ListedLot } from './find-lot.ts'
import { type Judged, standingOf, worse } from './standing.ts'

/** How a unit stands, by channel and range. Empty places: everything of it was withdrawn. */
export type BoardUnit = {
  serial: string
  records: number
  places: Map<string, Standing>
  firstAt: number
  lastAt: number
}

/** How every unit of a lot stands: what counts and lists are made from. */
export type Board = {
  records: number
  newest: number
  firstAt: number | null
  lastAt: number | null
  units: Units
  expected: readonly string[]
  /** What it takes to keep it: units, their places, serials expected. */
  size: number
}

type Row = Judged & {
  unitId: number
  unit: string
  channel: string
  range: string
  recordedAt: Date
}

const columns = `id, kind, follows, pass, verdict, unit_id AS unitId, unit, channel, range_id AS \`range\`,
  recorded_at AS recordedAt`
/** Units whose records are read at once. */
const block = 500
/** Units and places of them kept in all boards together; the boards used least recently go first. */
const keptMost = 400_000

/**
 * Boards of lots, kept between requests. A lot that has grown is read again only where it grew; the number of its records
 * tells whether a late one slipped in below, and then all of it is read.
 */
export class LotBoards {
  readonly #boards = new Map<number, Board>()
  readonly #reading = new Map<number, Promise<Board>>()
  readonly #most: number

  constructor(most = keptMost) {
    this.#most = most
  }

  /** Whether nothing has to be read. */
  isFresh(lot: ListedLot): boolean {
    const board = this.#boards.get(lot.id)
    return board !== undefined && isOf(board, lot)
  }

  /**
   * A board with all that the head counts, or more that came since. Two who ask at once share one reading: a big lot is read
   * once, however often somebody asks meanwhile.
   */
  async read(sql: Sql, lot: ListedLot): Promise<Board> {
    const shared = await this.#reading.get(lot.id)?.catch(() => undefined)
    if (shared && shared.records >= lot.records && shared.expected.length >= lot.expected) return shared
    const kept = this.#boards.get(lot.id)
    if (kept && isOf(kept, lot)) return kept
    const reading = readBoard(sql, lot, kept)
    this.#reading.set(lot.id, reading)
    try {
      const board = await reading
      this.#keep(lot.id, board)
      return board
    } finally {
      if (this.#reading.get(lot.id) === reading) this.#reading.delete(lot.id)
    }
  }

  #keep(id: number, board: Board): void {
    this.#boards.delete(id)
    this.#boards.set(id, board)
    let size = 0
    for (const kept of this.#boards.values()) size += kept.size
    for (const [oldest, kept] of this.#boards) {
      if (size <= this.#most || oldest === id) break
      this.#boards.delete(oldest)
      size -= kept.size
    }
  }
}

const isOf = (board: Board, lot: ListedLot) =>
  board.records === lot.records && board.newest === lot.newest && board.expected.length === lot.expected

/** Reads a lot afresh, or on from an older board of it. Never changes the older one: somebody may be counting it. */
export async function readBoard(sql: Sql, lot: ListedLot, before?: Board): Promise<Board> {
  const expected =
    before?.expected.length === lot.expected ? before.expected : await readExpected(sql, lot.id)
  if (before) {
    const grown = await readUnits(sql, lot, new Map(before.units), before.newest)
    const board = boardOf(grown, lot, expected)
    // More than were counted came in between; fewer means that a late one slipped in below the newest.
    if (board.records >= lot.records) return board
  }
  return boardOf(await readUnits(sql, lot, new Map(), 0), lot, expected)
}

type Units = Map<number, BoardUnit>

function boardOf(units: Units, { newest }: ListedLot, expected: readonly string[]): Board {
  let records = 0
  let size = units.size + expected.length
  let firstAt: number | null = null
  let lastAt: number | null = null
  for (const unit of units.values()) {
    records += unit.records
    size += unit.places.size
    firstAt = Math.min(firstAt ?? unit.firstAt, unit.firstAt)
    lastAt = Math.max(lastAt ?? unit.lastAt, unit.lastAt)
  }
  return { records, newest, firstAt, lastAt, units, expected, size }
}

async function readUnits(sql: Sql, lot: ListedLot, units: Units, since: number): Promise<Units> {
  const ids = await changedUnits(sql, lot, since)
  for (let at = 0; at < ids.length; at += block) {
    const rows = await sql.rows<Row>(
      `SELECT ${columns} FROM records WHERE design = ? AND lot = ? AND unit_id IN (?)
        ORDER BY recorded_at, id`,
      [lot.design, lot.key, ids.slice(at, at + block)],
    )
    for (const [id, ofUnit] of grouped(rows, ({ unitId }) => unitId)) units.set(id, unitOf(ofUnit))
  }
  return units
}

/** Units with records after a leaf, in the order in which units came to be. */
export async function changedUnits(sql: Sql, lot: ListedLot, since: number): Promise<number[]> {
  const rows = await sql.rows<{ unitId: number }>(
    `SELECT DISTINCT unit_id AS unitId FROM records WHERE design = ? AND lot = ? AND leaf_id > ? ORDER BY unit_id`,
    [lot.design, lot.key, since],
  )
  return rows.map(({ unitId }) => unitId)
}

function unitOf(rows: readonly Row[]): BoardUnit {
  const places = new Map<string, Standing>()
  for (const [place, ofPlace] of grouped(rows, placeKey)) {
    const stands = standingOf(ofPlace)
    if (stands) places.set(place, stands.standing)
  }
  const [first] = rows
  const last = rows.at(-1)
  if (!first || !last) throw new Error('A unit of a lot has no record.')
  const times = { firstAt: first.recordedAt.getTime(), lastAt: last.recordedAt.getTime() }
  return { serial: first.unit, records: rows.length, places, ...times }
}

export const placeKey = ({ channel, range }: { channel: string; range: string }) => `${range} ${channel}`

/** The whole unit: its worst place, or incomplete where it lacks one that others have. */
export function unitStanding(places: ReadonlyMap<string, Standing>, demanded: ReadonlySet<string>): Standing {
  let stands: Standing = 'ok-first'
  for (const place of demanded) stands = worse(stands, places.get(place) ?? 'incomplete')
  for (const standing of places.values()) stands = worse(stands, standing)
  return stands
}

/** Channels and ranges that units of the lot have, reference units apart. */
export function demandedBy(board: Board, references: ReadonlySet<number>): Set<string> {
  const demanded = new Set<string>()
  for (const [id, { places }] of board.units) {
    if (!references.has(id)) for (const place of places.keys()) demanded.add(place)
  }
  return demanded
}

export function grouped<Key, Row>(rows: readonly Row[], keyOf: (row: Row) => Key): Map<Key, Row[]> {
  const groups = new Map<Key, Row[]>()
  for (const row of rows) {
    const key = keyOf(row)
    const group = groups.get(key)
    if (group) group.push(row)
    else groups.set(key, [row])
  }
  return groups
}

async function readExpected(sql: Sql, lotId: number): Promise<string[]> {
  const rows = await sql.rows<{ serial: string }>('SELECT serial FROM lot_expected WHERE lot_id = ?', [lotId])
  // Sorted here, because pages compare serials as JavaScript does.
  return rows.map(({ serial }) => serial).sort((a, b) => (a < b ? -1 : 1))
}
