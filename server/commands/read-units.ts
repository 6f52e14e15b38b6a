import type { Unit } from '../../shared/contract/units.ts'
import type { Database } from '../db/connection.ts'
import type { Principal } from '../http/principal.ts'
import { maySeeDesign } from '../policies/may-see.ts'
import type { PlaceState } from './recording/place.ts'

type Row = { design: string; serial: string; channel: string | null; range: string; state: string }

/** Units of a serial with what is loaded in them. Who trims a unit must know its codes, whichever station made them. */
export async function readUnits(
  { sql }: Database,
  { serial, design }: { serial: string; design?: string | undefined },
  principal: Principal,
): Promise<Unit[]> {
  const rows = await sql.rows<Row>(
    `SELECT d.design_key AS design, u.serial, c.channel, c.range_id AS \`range\`, c.state
      FROM units u JOIN designs d ON d.id = u.design_id LEFT JOIN unit_codes c ON c.unit_id = u.id
      WHERE u.serial = ? ${design === undefined ? '' : 'AND d.design_key = ?'}
      ORDER BY d.design_key, c.channel, c.range_id`,
    design === undefined ? [serial] : [serial, design],
  )
  const units = new Map<string, Unit>()
  for (const row of rows) {
    if (!maySeeDesign(principal, row.design)) continue
    const unit = units.get(row.design) ?? { design: row.design, serial: row.serial, current: [] }
    units.set(row.design, unit)
    if (row.channel !== null) unit.current.push(currentOf(row, row.channel))
  }
  return [...units.values()]
}

function currentOf({ range, state }: Row, channel: string): Unit['current'][number] {
  const { current, last, pass } = JSON.parse(state) as PlaceState
  if (last === null) throw new Error('A place of a unit has a state but no record.')
  return {
    channel,
    range,
    codes: current?.codes ?? null,
    words: current?.words ?? null,
    record: current?.record ?? null,
    number: current?.number ?? null,
    revision: current?.revision ?? null,
    recordedAt: current?.recordedAt ?? null,
    lastRecord: last.record,
    pass,
  }
}
