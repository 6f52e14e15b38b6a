import { designDocument } from '../../../shared/contract/design.ts'
import type { Notice, RecordBody } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { CertificateFacts, Trim, Verification } from '../../certificate/facts.ts'
import type { Database } from '../../db/connection.ts'
import type { Sql } from '../../db/sql.ts'
import type { Principal } from '../../http/principal.ts'
import { proveRecord } from '../../ledger/prove.ts'
import { maySeeRecord } from '../../policies/may-see.ts'
import { readRevision } from '../read-design.ts'
import { readStored } from '../recording/read-stored.ts'

type Read = { body: RecordBody; notices: readonly Notice[] }

/** Longer chains than this are no trimming any more. */
const chainMost = 100

/**
 * All that a certificate of a record's unit, channel and range says: the chain back to what was found, the trim whose codes
 * count, and what was measured with them; each as its canonical bytes have it.
 */
export async function readCertificate(
  database: Database,
  id: string,
  principal: Principal,
): Promise<CertificateFacts> {
  const { sql } = database
  const chain = await readChain(sql, id)
  const asked = chain.at(-1)!
  const measured = chain.filter(({ body }) => body.result !== null)
  const subject = measured.at(-1)
  if (!subject) {
    throw new OgeeError('not-found', 'That record leads to no measurement, so there is nothing to certify.')
  }
  const trims = measured.filter(isTrim)
  const trim = trims.at(-1) ?? null
  const left = isVerification(subject) ? subject : await verificationOf(sql, subject.body)
  const found = trims[0] ?? null
  const shown = unique([asked, ...(left ? [left] : []), ...(trim ? [trim] : []), ...(found ? [found] : [])])
  await requireSight(sql, shown, principal)
  const { row, bytes } = await revisionOf(database, subject.body)
  return {
    subject: subject.body,
    found: found?.body ?? null,
    trim: trim?.body ?? null,
    left: left?.body ?? null,
    design: designDocument.parse(JSON.parse(bytes.toString('utf8'))),
    revision: {
      releasedBy: row.releasedBy,
      releasedAt: row.releasedAt?.toISOString() ?? null,
      releasedByAuthor: Boolean(row.releasedByAuthor),
      withdrawnAt: row.withdrawnAt?.toISOString() ?? null,
    },
    notices: shown.flatMap(({ body, notices }) =>
      notices.map((notice) => ({ ...notice, message: `Record ${body.number}: ${notice.message}` })),
    ),
    override: trim === null ? null : await overrideOf(sql, trim.body.id),
    proofs: await proofsOf(sql, shown),
  }
}

const isTrim = (read: Read): read is Read & { body: Trim } => read.body.result?.format === 'ogee.codes/1'
const isVerification = (read: Read): read is Read & { body: Verification } =>
  read.body.result?.format === 'ogee.verify/1'
const unique = (reads: readonly Read[]) => [...new Map(reads.map((read) => [read.body.id, read])).values()]

/** A token of one station sees no other station's part of the story, so it gets none of it. */
async function requireSight(sql: Sql, reads: readonly Read[], principal: Principal): Promise<void> {
  const rows = await sql.rows<{ stationId: string | null; design: string }>(
    'SELECT station_id AS stationId, design FROM records WHERE id IN (?)',
    [reads.map(({ body }) => body.id)],
  )
  if (rows.every((row) => maySeeRecord(principal, row))) return
  throw new OgeeError('not-found', 'There is no such record, or it is not open to you.')
}

/** The record and all that it follows, oldest first. */
async function readChain(sql: Sql, id: string): Promise<Read[]> {
  const chain: Read[] = []
  for (let next: string | null = id; next !== null && chain.length < chainMost; ) {
    const read: Read | null = await readOne(sql, next)
    if (!read) break
    chain.unshift(read)
    next = read.body.follows
  }
  if (chain.length === 0)
    throw new OgeeError('not-found', 'There is no such record, or it is not open to you.')
  return chain
}

async function readOne(sql: Sql, id: string): Promise<Read | null> {
  const stored = (await readStored(sql, [id])).get(id)
  return stored ? { body: JSON.parse(stored.text) as RecordBody, notices: stored.notices } : null
}

/** The newest verification that follows a trim and was not withdrawn. */
async function verificationOf(sql: Sql, { id }: RecordBody): Promise<(Read & { body: Verification }) | null> {
  const [found] = await sql.rows<{ id: string }>(
    `SELECT r.id FROM records r WHERE r.follows = ? AND r.kind = 'verify'
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = r.id AND w.kind = 'withdraw')
      ORDER BY r.recorded_at DESC, r.id DESC LIMIT 1`,
    [id],
  )
  const read = found ? await readOne(sql, found.id) : null
  return read && isVerification(read) ? read : null
}

/** The newest override of a trim that was not withdrawn. */
async function overrideOf(sql: Sql, id: string): Promise<CertificateFacts['override']> {
  const [found] = await sql.rows<{ id: string }>(
    `SELECT o.id FROM records o WHERE o.follows = ? AND o.kind = 'override'
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = o.id AND w.kind = 'withdraw')
      ORDER BY o.recorded_at DESC, o.id DESC LIMIT 1`,
    [id],
  )
  const read = found ? await readOne(sql, found.id) : null
  return read ? { number: read.body.number, by: read.body.by.name, reason: read.body.reason ?? '' } : null
}

async function revisionOf(database: Database, { design, revision }: RecordBody) {
  const found = await readRevision(database, design, revision)
  if (!found) throw new Error(`Revision ${revision} of ${design} has gone.`)
  return found
}

async function proofsOf(sql: Sql, reads: readonly Read[]): Promise<CertificateFacts['proofs']> {
  const proofs = []
  for (const { body } of reads) proofs.push({ number: body.number, proof: await proveRecord(sql, body.id) })
  return proofs
}
