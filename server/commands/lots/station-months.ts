import type { StationMonth } from '../../../shared/contract/lots.ts'
import { type Sql, type SqlParameter, sqlTime } from '../../db/sql.ts'

const months = 12

type Row = Omit<StationMonth, 'n' | 'gainS' | 'offsetS'> & { n: number; gainS: number; offsetS: number }

const sums = `COUNT(*) AS n, AVG(gain_error_ppm) AS gainMeanPpm, STDDEV_SAMP(gain_error_ppm) AS gainS,
  AVG(offset_error_v) AS offsetMeanV, STDDEV_SAMP(offset_error_v) AS offsetS`

/**
 * What each station read of a design in the year before `to`, by month. Reference units by their verifications, since
 * their codes stay; other units by their first trim in a lot that reached, as found. Suspect records are left out, and so
 * are withdrawn ones.
 */
export async function readStationMonths(sql: Sql, design: string, to: Date): Promise<StationMonth[]> {
  const from = new Date(to)
  from.setUTCMonth(from.getUTCMonth() - months)
  const bounds: SqlParameter[] = [design, sqlTime(from), sqlTime(to)]
  const stands = `r.design = ? AND r.recorded_at >= ? AND r.recorded_at <= ? AND r.station IS NOT NULL
    AND r.gain_error_ppm IS NOT NULL
    AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = r.id AND w.kind = 'withdraw')`
  const references = await sql.rows<Row>(
    `SELECT r.station, DATE_FORMAT(r.recorded_at, '%Y-%m') AS month, u.serial AS unit, r.channel, r.range_id AS \`range\`,
      ${sums} FROM records r JOIN units u ON u.id = r.unit_id
      WHERE ${stands} AND u.reference_at IS NOT NULL AND r.kind = 'verify'
      GROUP BY r.station, month, u.serial, r.channel, r.range_id ORDER BY month, r.station, u.serial, r.channel`,
    bounds,
  )
  const units = await sql.rows<Row>(
    `SELECT r.station, DATE_FORMAT(r.recorded_at, '%Y-%m') AS month, NULL AS unit, r.channel, r.range_id AS \`range\`,
      ${sums} FROM records r JOIN units u ON u.id = r.unit_id
      WHERE ${stands} AND u.reference_at IS NULL AND r.kind = 'trim' AND r.pass = 1 AND r.lot IS NOT NULL
      AND r.verdict IN ('ok', 'too-coarse')
      GROUP BY r.station, month, r.channel, r.range_id ORDER BY month, r.station, r.channel`,
    bounds,
  )
  return [...references, ...units].map((row) => ({
    ...row,
    n: Number(row.n),
    gainS: Number(row.n) > 1 ? row.gainS : null,
    offsetS: Number(row.n) > 1 ? row.offsetS : null,
  }))
}
