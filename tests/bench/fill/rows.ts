import { sha256 } from '../../../server/ledger/crypto.ts'
import type { Signer } from '../../../server/ledger/signer.ts'
import { leafBytes, leafHash } from '../../../shared/ledger/leaf.ts'
import { signReceipt } from '../../../shared/ledger/receipt.ts'
import type { RecordTemplate, Slots } from './templates.ts'

/** Rows as LOAD DATA reads them: cells between tabs, nothing escaped, an empty cell for NULL. */
export type Rows = { leaves: string[]; records: string[]; hashes: Uint8Array[] }

export const emptyRows = (): Rows => ({ leaves: [], records: [], hashes: [] })

export const recordColumns = `(id, number, kind, unit_id, unit, channel, range_id, @lot, design, revision, pass, @follows,
  @verdict, accepted, @gain_error_ppm, @offset_error_v, @gain_code, @offset_code, @worst_lsb, by_name, by_id, @attempt,
  @station_id, @station, @measured_at, recorded_at, leaf_id, receipt_key, @signature, notices)
  SET lot = NULLIF(@lot, ''), follows = NULLIF(@follows, ''), verdict = NULLIF(@verdict, ''),
  gain_error_ppm = NULLIF(@gain_error_ppm, ''), offset_error_v = NULLIF(@offset_error_v, ''),
  gain_code = NULLIF(@gain_code, ''), offset_code = NULLIF(@offset_code, ''), worst_lsb = NULLIF(@worst_lsb, ''),
  attempt = NULLIF(@attempt, ''), station_id = NULLIF(@station_id, ''), station = NULLIF(@station, ''),
  measured_at = NULLIF(@measured_at, ''), receipt_signature = UNHEX(@signature)`

export const leafColumns = `(id, kind, at, @hash, body) SET hash = UNHEX(@hash)`

export type Maker = { id: string; name: string; by: string; stationId: string; station: string }

/** Adds one record: its leaf, its receipt, its row. */
export function addRecord(
  rows: Rows,
  signer: Signer,
  template: RecordTemplate,
  slots: Slots,
  place: { leafId: number; unitId: number; attempt: number | null; maker: Maker },
): void {
  const text = template.text(slots)
  const hash = leafHash(sha256, leafBytes('record', slots.recordedAt, Buffer.from(text)))
  const hex = Buffer.from(hash).toString('hex')
  const promised = { record: slots.id, leaf: hex, recordedAt: slots.recordedAt }
  const receipt = signReceipt(promised, signer.keyName, signer.sign)
  const { body } = template
  const { result } = body
  const codes = (result?.format === 'ogee.codes/1' ? result.trim.codes : null) ?? {}
  const worst = result?.format === 'ogee.codes/1' ? result.trim.predicted?.worstLsb : result?.worst.errorLsb
  const { maker } = place
  rows.hashes.push(hash)
  rows.leaves.push(`${place.leafId}\trecord\t${sqlTime(slots.recordedAt)}\t${hex}\t${text}\n`)
  rows.records.push(
    `${[
      slots.id,
      slots.number,
      body.kind,
      place.unitId,
      slots.unit,
      body.channel,
      body.range,
      slots.lot,
      body.design,
      body.revision,
      body.pass,
      template.follows === null ? '' : slots.follows,
      body.verdict ?? '',
      body.accepted ? 1 : 0,
      result?.fit?.gainErrorPpm ?? '',
      result?.fit?.offsetErrorV ?? '',
      codes.gain ?? '',
      codes.offset ?? '',
      worst ?? '',
      maker.name,
      maker.id,
      place.attempt ?? '',
      maker.stationId,
      maker.station,
      sqlTime(slots.measuredAt),
      sqlTime(slots.recordedAt),
      place.leafId,
      receipt.key,
      Buffer.from(receipt.signature, 'base64').toString('hex'),
      '[]',
    ].join('\t')}\n`,
  )
}

const sqlTime = (iso: string) => iso.slice(0, 23).replace('T', ' ')
