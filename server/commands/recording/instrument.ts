import { calibrationState, overdueSentence } from '../../../shared/calibration.ts'
import type { InstrumentFacts } from '../../../shared/contract/instruments.ts'
import type { RecordRequest } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { measuredAtOf } from '../../../shared/measured-at.ts'
import type { Sql } from '../../db/sql.ts'
import { factsOf } from '../../models/instrument.ts'
import { overdueAllowed } from '../instruments/overdue-rule.ts'

type Row = InstrumentFacts & { retiredAt: Date | null }

/** Instruments that some requests name, and the site's rule, as they stand in the transaction. */
export type Instruments = { rows: readonly Row[]; overdueAllowed: boolean }
/** An instrument as a record keeps it, and whether it was overdue when it measured. */
export type Used = { facts: InstrumentFacts; isOverdue: boolean }

export async function readInstruments(sql: Sql, ids: readonly string[]): Promise<Instruments> {
  if (ids.length === 0) return { rows: [], overdueAllowed: false }
  const rows = await sql.rows<Row>(
    `SELECT id, serial, title, gain_ppm AS gainPpm, offset_v AS offsetV, calibrated_on AS calibratedOn,
      due_on AS dueOn, retired_at AS retiredAt FROM instruments WHERE id IN (?)`,
    [[...new Set(ids)]],
  )
  return { rows, overdueAllowed: await overdueAllowed(sql) }
}

/**
 * The instrument that a measurement names. It is judged by when it measured: a measurement that waited in a spool is as
 * good as it was, and one that is sent before the due day says nothing about the day after.
 */
export function usedInstrument(
  instruments: Instruments,
  request: RecordRequest,
  recordedAt: string,
): Used | null {
  const id = request.conditions?.instrument
  if (id === undefined) return null
  const row = instruments.rows.find((one) => one.id === id)
  if (!row) {
    throw refusal(
      'instrument-unknown',
      `There is no instrument ${id}. Without one the design's limits apply.`,
    )
  }
  const facts = factsOf(row)
  const at = measuredMs(request, recordedAt)
  if (row.retiredAt !== null && at >= row.retiredAt.getTime()) {
    throw refusal('instrument-retired', `Instrument ${id} is retired. Name the one that measured.`)
  }
  const isOverdue = calibrationState(facts.dueOn, at) === 'overdue'
  if (isOverdue && !instruments.overdueAllowed) {
    const sentence = overdueSentence(id, facts.dueOn)
    throw refusal('instrument-overdue', `${sentence} Recording needs another instrument.`)
  }
  return { facts, isOverdue }
}

/** A clock that runs ahead makes nothing overdue. */
function measuredMs(request: RecordRequest, recordedAt: string): number {
  const said = measuredAtOf(request) ?? request.claimed?.at ?? recordedAt
  return Math.min(Date.parse(said), Date.parse(recordedAt))
}

function refusal(
  code: 'instrument-unknown' | 'instrument-retired' | 'instrument-overdue',
  message: string,
): OgeeError {
  return new OgeeError(code, message, { errors: [{ path: '/conditions/instrument', message }] })
}
