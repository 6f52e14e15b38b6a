import type { RecordBody } from '../../../shared/contract/record.ts'
import { noticesHash, signReceipt } from '../../../shared/ledger/receipt.ts'
import { type Sql, type SqlValue, sqlTime } from '../../db/sql.ts'
import { sha256 } from '../../ledger/crypto.ts'
import { insertLeaves, type NewLeaf, newLeaf } from '../../ledger/leaves.ts'
import type { Signer } from '../../ledger/signer.ts'
import type { Decision } from './context.ts'
import type { StoredRecord } from './job.ts'
import type { Places } from './place.ts'

type Ready = { decision: Decision; leaf: NewLeaf; stored: StoredRecord }

/** Makes bytes, leaf and receipt of a decided record. Pure but for the signature. */
export function makeReady(decision: Decision, signer: Signer): Ready {
  const { body, notices } = decision
  const leaf = newLeaf('record', body.recordedAt, body as never)
  const promised = {
    record: body.id,
    leaf: leaf.hash.toString('hex'),
    recordedAt: body.recordedAt,
    notices: noticesHash(sha256, notices),
  }
  const receipt = signReceipt(promised, signer.keyName, signer.sign)
  return { decision, leaf, stored: { text: leaf.text, notices, receipt, index: null } }
}

/** Stores records with their leaves, their places in the queue, and how the units stand now. */
export async function storeRecords(sql: Sql, ready: readonly Ready[], places: Places): Promise<void> {
  if (ready.length === 0) return
  const leafIds = await insertLeaves(
    sql,
    ready.map((one) => one.leaf),
  )
  // Neither needs the other's answer, so the second is on its way before the first is done.
  const both = await Promise.allSettled([
    sql.run(`INSERT INTO records (${columns}) VALUES ?`, [ready.map((one, i) => rowOf(one, leafIds[i]!))]),
    places.write(sql),
  ])
  for (const one of both) if (one.status === 'rejected') throw one.reason
}

const columns = `id, number, kind, unit_id, unit, channel, range_id, lot, design, revision, pass, follows, verdict,
  accepted, gain_error_ppm, offset_error_v, gain_code, offset_code, worst_lsb, by_name, by_id, attempt,
  station_id, station, measured_at, recorded_at, leaf_id, receipt_key, receipt_signature, notices`

function rowOf({ decision, stored }: Ready, leafId: number): SqlValue[] {
  const { body, context, notices, state } = decision
  const { receipt } = stored
  const codes = body.kind === 'override' ? (state.current?.codes ?? {}) : codesOf(body)
  const line = lineOf(body)
  return [
    body.id,
    body.number,
    body.kind,
    context.unit.id,
    body.unit,
    body.channel,
    body.range,
    body.lot,
    body.design,
    body.revision,
    body.pass,
    body.follows,
    body.verdict,
    body.accepted,
    line.gainErrorPpm,
    line.offsetErrorV,
    codes.gain ?? null,
    codes.offset ?? null,
    line.worstLsb,
    body.by.name,
    body.by.id,
    body.kind === 'trim' || body.kind === 'verify' ? (state.day?.[body.kind] ?? null) : null,
    context.job.recorder.station?.id ?? null,
    body.station,
    body.measuredAt === null ? null : sqlTime(body.measuredAt),
    sqlTime(body.recordedAt),
    leafId,
    receipt.key,
    Buffer.from(receipt.signature, 'base64'),
    JSON.stringify(notices),
  ]
}

function codesOf(body: RecordBody): { gain?: number | undefined; offset?: number | undefined } {
  return (body.result?.format === 'ogee.codes/1' ? body.result.trim.codes : null) ?? {}
}

/** What a list shows of the result. */
function lineOf({ result }: RecordBody) {
  return {
    gainErrorPpm: result?.fit?.gainErrorPpm ?? null,
    offsetErrorV: result?.fit?.offsetErrorV ?? null,
    worstLsb:
      result?.format === 'ogee.codes/1'
        ? (result.trim.predicted?.worstLsb ?? null)
        : (result?.worst.errorLsb ?? null),
  }
}
