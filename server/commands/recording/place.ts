import type { Sql } from '../../db/sql.ts'

type CodePair = { gain?: number | undefined; offset?: number | undefined }
type WordPair = { gain?: string | undefined; offset?: string | undefined }

/** The codes last accepted, and the record they come from. */
export type CurrentCodes = {
  record: string
  number: number
  revision: number
  recordedAt: string
  codes: CodePair
  words: WordPair
}

/** How one channel and range of a unit stands: derived from its records, and locked with the unit's row. */
export type PlaceState = {
  current: CurrentCodes | null
  /** The newest record of any kind. */
  last: { record: string; recordedAt: string; station: string | null } | null
  /** The newest trim or verification that was not withdrawn: what `last` follows. */
  measurement: string | null
  /** Trims in its chain so far. */
  pass: number
  /** Measurements on the last UTC day that had one, so that a record can say which it is of its kind on its day. */
  day?: { on: string; trim: number; verify: number } | undefined
}

export type Place = { unitId: number; channel: string; range: string }

const untouched: PlaceState = { current: null, last: null, measurement: null, pass: 0 }

/** States of the places of some units, and what changed of them. */
export class Places {
  readonly #states = new Map<string, PlaceState>()
  readonly #changed = new Map<string, Place>()

  static async read(sql: Sql, unitIds: readonly number[]): Promise<Places> {
    const places = new Places()
    if (unitIds.length === 0) return places
    const rows = await sql.rows<Place & { state: string }>(
      'SELECT unit_id AS unitId, channel, range_id AS `range`, state FROM unit_codes WHERE unit_id IN (?)',
      [unitIds],
    )
    for (const row of rows) places.#states.set(keyOf(row), JSON.parse(row.state) as PlaceState)
    return places
  }

  at(place: Place): PlaceState {
    return this.#states.get(keyOf(place)) ?? untouched
  }

  /** Newest measurements of all channels and ranges of a unit. */
  measurementsOf(unitId: number): string[] {
    return [...this.#states].flatMap(([key, state]) =>
      key.startsWith(`${unitId} `) ? (state.measurement ?? []) : [],
    )
  }

  put(place: Place, state: PlaceState): void {
    this.#states.set(keyOf(place), state)
    this.#changed.set(keyOf(place), place)
  }

  async write(sql: Sql): Promise<void> {
    if (this.#changed.size === 0) return
    await sql.run(
      `INSERT INTO unit_codes (unit_id, channel, range_id, state) VALUES ?
        ON DUPLICATE KEY UPDATE state = VALUES(state)`,
      [
        [...this.#changed.values()].map((place) => [
          place.unitId,
          place.channel,
          place.range,
          JSON.stringify(this.at(place)),
        ]),
      ],
    )
  }
}

const keyOf = ({ unitId, channel, range }: Place) => `${unitId} ${range} ${channel}`
