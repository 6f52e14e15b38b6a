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

/** A record of the chain, as far as it tells where the chain goes. */
type Link = { id: string; kind: RecordBody['kind']; follows: string | null }

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
  const chain = await readChain(sql, id, principal)
  const measured = chain.filter(({ kind }) => kind === 'trim' || kind === 'verify')
  const last = measured.at(-1)
  if (!last) {
    throw new OgeeError('not-found', 'That record leads to no measurement, so there is nothing to certify.')
  }
  const trims = measured.filter(({ kind }) => kind === 'trim')
  const leftId = last.kind === 'verify' ? last.id : await verificationOf(sql, last.id)
  const ids = unique([id, leftId, trims.at(-1)?.id, trims[0]?.id])
  await requireSight(sql, ids, principal)
  const shown = await readAll(sql, ids)
  const bodyOf = (id: string | null | undefined) => shown.find(({ body }) => body.id === id)?.body ?? null
  const subject = bodyOf(last.id)!
  const trim = trimIn(bodyOf(trims.at(-1)?.id))
  const { row, bytes } = await revisionOf(database, subject)
  return {
    subject,
    found: trimIn(bodyOf(trims[0]?.id)),
    trim,
    left: verificationIn(bodyOf(leftId)),
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
    override: trim === null ? null : await overrideOf(sql, trim.id),
    proofs: await proofsOf(sql, shown),
  }
}

const isTrim = (body: RecordBody): body is Trim => body.result?.format === 'ogee.codes/1'
const isVerification = (body: RecordBody): body is Verification => body.result?.format === 'ogee.verify/1'
const trimIn = (body: RecordBody | null) => (body !== null && isTrim(body) ? body : null)
const verificationIn = (body: RecordBody | null) => (body !== null && isVerification(body) ? body : null)
const unique = (ids: readonly (string | null | undefined)[]) => [...new Set(ids.filter((id) => id != null))]

const notOpen = () => new OgeeError('not-found', 'There is no such record, or it is not open to you.')

/** A token of one station sees no other station's part of the story, so it gets none of it. */
async function requireSight(sql: Sql, ids: readonly string[], principal: Principal): Promise<void> {
  const rows = await sql.rows<{ stationId: string | null; design: string }>(
    'SELECT station_id AS stationId, design FROM records WHERE id IN (?)',
    [ids],
  )
  if (rows.length === 0 || !rows.every((row) => maySeeRecord(principal, row))) throw notOpen()
}

/** The record and all that it follows, oldest first, whatever its length; nothing is read for who may not see the record. */
async function readChain(sql: Sql, id: string, principal: Principal): Promise<Link[]> {
  await requireSight(sql, [id], principal)
  // A record follows records of its own unit, channel and range only.
  const links = await sql.rows<Link>(
    `SELECT r.id, r.kind, r.follows FROM records r JOIN records a
      ON r.unit_id = a.unit_id AND r.channel = a.channel AND r.range_id = a.range_id WHERE a.id = ?`,
    [id],
  )
  const left = new Map(links.map((link) => [link.id, link]))
  const chain: Link[] = []
  for (let next: string | null = id; next !== null; ) {
    const link: Link | undefined = left.get(next)
    if (!link) break
    left.delete(next)
    chain.push(link)
    next = link.follows
  }
  return chain.reverse()
}

/** Records as they are stored, in the order of their ids as given. */
async function readAll(sql: Sql, ids: readonly string[]): Promise<Read[]> {
  const stored = await readStored(sql, ids)
  return ids.flatMap((id) => {
    const one = stored.get(id)
    return one ? [{ body: JSON.parse(one.text) as RecordBody, notices: one.notices }] : []
  })
}

/** The newest verification that follows a trim and was not withdrawn. */
async function verificationOf(sql: Sql, id: string): Promise<string | null> {
  const [found] = await sql.rows<{ id: string }>(
    `SELECT r.id FROM records r WHERE r.follows = ? AND r.kind = 'verify'
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = r.id AND w.kind = 'withdraw')
      ORDER BY r.recorded_at DESC, r.id DESC LIMIT 1`,
    [id],
  )
  return found?.id ?? null
}

/** The newest override of a trim that was not withdrawn. */
async function overrideOf(sql: Sql, id: string): Promise<CertificateFacts['override']> {
  const [found] = await sql.rows<{ id: string }>(
    `SELECT o.id FROM records o WHERE o.follows = ? AND o.kind = 'override'
      AND NOT EXISTS (SELECT 1 FROM records w WHERE w.follows = o.id AND w.kind = 'withdraw')
      ORDER BY o.recorded_at DESC, o.id DESC LIMIT 1`,
    [id],
  )
  const [read] = found ? await readAll(sql, [found.id]) : []
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
