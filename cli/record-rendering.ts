import type { Record as StoredRecord } from '../shared/contract/record.ts'
import type { CodesResult, VerifyResult } from '../shared/solver/types.ts'
import { codesCsv, codesTable } from './codes-rendering.ts'
import type { Rendering } from './output.ts'
import type { Cell } from './table.ts'
import { verifyTable } from './verify-rendering.ts'

type Known = Pick<
  StoredRecord,
  | 'format'
  | 'kind'
  | 'unit'
  | 'channel'
  | 'range'
  | 'lot'
  | 'design'
  | 'revision'
  | 'designHash'
  | 'pass'
  | 'follows'
  | 'applied'
  | 'conditions'
  | 'verdict'
  | 'accepted'
  | 'notices'
  | 'station'
  | 'measuredAt'
>

/** A record as the server stored it, or one of the same shape that stands nowhere yet: its id is null. */
export type AnyRecord = StoredRecord | DryRecord | SpooledRecord
export type DryRecord = Known & {
  id: null
  dryRun: true
  number: null
  result: CodesResult | VerifyResult
  recordedAt: null
}
/** On disk and not yet sent: `spooled` is its file. Of a chain that only the server knows there is no pass. */
export type SpooledRecord = Omit<DryRecord, 'dryRun' | 'pass'> & { pass: number | null; spooled: string }

const heads = ['unit', 'channel', 'range', 'pass', 'verdict', 'accepted', ...codesCsv.heads, 'record']

export function recordRendering(record: AnyRecord): Rendering {
  const codes = record.result?.format === 'ogee.codes/1' ? record.result : undefined
  const verified = record.result?.format === 'ogee.verify/1' ? record.result : undefined
  const { unit, channel, range, pass, verdict, accepted, id } = record
  const row: Cell[] = [unit, channel, range, pass, verdict, String(accepted), ...resultCells(record), id]
  return {
    json: record,
    table: (colour) =>
      `${headLines(record)}\n${codes ? `\n${codesTable(codes, colour)}` : ''}${verified ? `\n${verifyTable(verified, colour)}` : ''}`,
    csv: { heads, rows: [row] },
  }
}

/** Codes of a trim; of a verification what was measured with them loaded. */
export function resultCells({ result }: Pick<AnyRecord, 'result'>): Cell[] {
  if (result?.format === 'ogee.codes/1') return codesCsv.row(result)
  const { fit, worst } = result ?? {}
  return [null, null, null, null, fit?.offsetErrorV, fit?.gainErrorPpm, worst?.errorLsb]
}

function headLines(record: AnyRecord): string {
  const { unit, channel, range, design, revision, pass, number, recordedAt } = record
  const chain = pass === null ? '' : `, pass ${pass}`
  const where = `Unit ${unit}, channel ${channel}, range ${range}, design ${design} revision ${revision}${chain}.`
  if ('spooled' in record) return `${where}\nSaved on this computer in ${record.spooled}. Not yet sent.`
  if (number === null || recordedAt === null) return `${where}\nNot recorded: a dry run.`
  return `${where}\nRecorded as ${grouped(number)} at ${recordedAt.replace(/\.\d+/, '')}.`
}

/** 1004317 as 1 004 317. */
export const grouped = (number: number) => String(number).replaceAll(/\B(?=(\d{3})+$)/g, ' ')
