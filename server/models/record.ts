import type { Sequelize } from 'sequelize'
import type { Kind, RecordLine } from '../../shared/contract/record.ts'
import { bytes, flag, longText, real, type Table, table, text, time, whole } from './table.ts'

/** Written once, by record-trims; read here. */
export type RecordRow = {
  id: string
  number: number
  kind: Kind
  unitId: number
  unit: string
  channel: string
  rangeId: string
  lot: string | null
  design: string
  revision: number
  pass: number
  follows: string | null
  verdict: RecordLine['verdict']
  accepted: boolean
  gainErrorPpm: number | null
  offsetErrorV: number | null
  gainCode: number | null
  offsetCode: number | null
  worstLsb: number | null
  byName: string
  byId: string | null
  /** The how manieth of its kind that day for its unit, channel and range; null for what is no measurement. */
  attempt: number | null
  stationId: string | null
  station: string | null
  measuredAt: Date | null
  recordedAt: Date
  leafId: number
  receiptKey: string
  receiptSignature: Buffer
  /** JSON: notices given when it was recorded. */
  notices: string
}

export const records = (sequelize: Sequelize): Table<RecordRow> =>
  table<RecordRow>(sequelize, 'records', {
    id: { type: text, primaryKey: true },
    number: whole,
    kind: text,
    unitId: whole,
    unit: text,
    channel: text,
    rangeId: text,
    lot: text,
    design: text,
    revision: whole,
    pass: whole,
    follows: text,
    verdict: text,
    accepted: flag,
    gainErrorPpm: real,
    offsetErrorV: real,
    gainCode: whole,
    offsetCode: whole,
    worstLsb: real,
    byName: text,
    byId: text,
    attempt: whole,
    stationId: text,
    station: text,
    measuredAt: time,
    recordedAt: time,
    leafId: whole,
    receiptKey: text,
    receiptSignature: bytes,
    notices: longText,
  })

/** What a list reads of a record. */
export type RecordLineRow = Omit<
  RecordRow,
  'unitId' | 'follows' | 'byId' | 'stationId' | 'leafId' | 'receiptKey' | 'receiptSignature' | 'notices'
> & { finding: RecordLine['finding'] }
export const lineColumns = `r.id, r.number, r.kind, r.unit, r.channel, r.range_id AS rangeId, r.lot, r.design, r.revision,
  r.pass, r.verdict, r.accepted, r.gain_error_ppm AS gainErrorPpm, r.offset_error_v AS offsetErrorV,
  r.gain_code AS gainCode, r.offset_code AS offsetCode, r.worst_lsb AS worstLsb, r.attempt, r.by_name AS byName,
  r.station, r.measured_at AS measuredAt, r.recorded_at AS recordedAt,
  (SELECT IF(COUNT(*) > COUNT(c.id), 'open', 'closed') FROM findings f LEFT JOIN finding_answers c ON c.closes = f.id
    WHERE f.record_id = r.id HAVING COUNT(*) > 0) AS finding`

export function recordLineReply(row: RecordLineRow): RecordLine {
  return {
    id: row.id,
    number: row.number,
    kind: row.kind,
    unit: row.unit,
    channel: row.channel,
    range: row.rangeId,
    lot: row.lot,
    design: row.design,
    revision: row.revision,
    pass: row.pass,
    verdict: row.verdict,
    accepted: Boolean(row.accepted),
    gainErrorPpm: row.gainErrorPpm,
    offsetErrorV: row.offsetErrorV,
    gainCode: row.gainCode,
    offsetCode: row.offsetCode,
    worstLsb: row.worstLsb,
    attempt: row.attempt,
    by: row.byName,
    station: row.station,
    measuredAt: row.measuredAt?.toISOString() ?? null,
    recordedAt: row.recordedAt.toISOString(),
    finding: row.finding,
  }
}
