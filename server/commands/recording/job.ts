import type { Role } from '../../../shared/contract/primitives.ts'
import type { Receipt } from '../../../shared/contract/receipt.ts'
import type { Notice, RecordBody, RecordRequest } from '../../../shared/contract/record.ts'
import type { OgeeError } from '../../../shared/errors.ts'
import { canonicalBytes, type Json } from '../../../shared/ledger/canonical.ts'
import type { Principal } from '../../http/principal.ts'
import { sha256 } from '../../ledger/crypto.ts'

/** Who records, as the record will say for ever. */
export type Recorder = {
  by: RecordBody['by']
  station: { id: string; name: string } | null
  /** Idempotency keys are of a station or of a person (contract.md). */
  scope: string
  role: Role | null
}

/** One request to record, checked as far as it can be without the database. */
export type Job = {
  request: RecordRequest
  recorder: Recorder
  key: string
  bodyHash: Buffer
  /** When it counts as recorded, where that is not now: demo data tell of two years. */
  at?: Date
}

/** A record as it stands in the database. */
export type StoredRecord = {
  /** Canonical text of the body: the ledger's bytes. */
  text: string
  notices: Notice[]
  receipt: Receipt
  index: number | null
}

export type Outcome =
  | { done: true; record: StoredRecord; replayed: boolean }
  | { done: false; error: OgeeError | Error }

export function recorderOf(principal: Principal): Recorder {
  if (principal.kind === 'token') {
    const { id, name, station } = principal
    return { by: { kind: 'token', id, name }, station, scope: station?.id ?? id, role: null }
  }
  const { id, name, role } = principal
  return { by: { kind: 'person', id, name, role }, station: null, scope: id, role }
}

/** How much work a request is, and how long its record: its points and their readings. */
export function weightOf({ points }: RecordRequest): number {
  return (points ?? []).reduce((sum, { readings }) => sum + 1 + (readings?.length ?? 0), 0)
}

/**
 * Hash of what the request asks for: its RFC 8785 form without `claimed`, which the station's own clock gets into.
 * The command line makes its default idempotency key from the same bytes.
 */
export function bodyHashOf(rawBody: unknown): Buffer {
  const { claimed: _, ...rest } = rawBody as { [key: string]: Json }
  return Buffer.from(sha256(canonicalBytes(rest)))
}
