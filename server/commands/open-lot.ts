import type { Database } from '../db/connection.ts'
import { sqlTime } from '../db/sql.ts'

/** Opens a lot of a design's revision. Guarantee: opening it again changes nothing; a lot keeps its revision. */
export async function openLot(
  { sql }: Pick<Database, 'sql'>,
  { design, key, revision, at }: { design: string; key: string; revision: number; at: Date },
): Promise<void> {
  await sql.run(
    `INSERT INTO lots (design_id, lot_key, revision, state, created_at)
      SELECT id, ?, ?, 'open', ? FROM designs WHERE design_key = ? ON DUPLICATE KEY UPDATE state = lots.state`,
    [key, revision, sqlTime(at), design],
  )
}
