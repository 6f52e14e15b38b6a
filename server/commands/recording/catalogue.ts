import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { prepareTrim, type TrimChannel } from '../../../shared/solver/prepare-trim.ts'
import type { Sql } from '../../db/sql.ts'
import type { RevisionState } from '../../models/design.ts'

export type RevisionInPlay = {
  designId: number
  design: string
  number: number
  state: RevisionState
  hash: string
  withdrawnAt: Date | null
  releasedByAuthor: boolean
}
export type LotInPlay = { designId: number; lotKey: string; revision: number; state: string }

/**
 * Designs and lots that some requests name, as they stand in the transaction. Lots stay as they are until it ends: their rows
 * are locked, shared with other recordings, before any unit is, so that closing one waits for what is under way.
 */
export type Catalogue = { revisions: readonly RevisionInPlay[]; lots: readonly LotInPlay[] }

export async function readCatalogue(
  sql: Sql,
  designs: readonly string[],
  lots: readonly string[],
): Promise<Catalogue> {
  const rows = await sql.rows<Omit<RevisionInPlay, 'hash'> & { documentHash: Buffer }>(
    `SELECT r.design_id AS designId, d.design_key AS design, r.number, r.state, r.document_hash AS documentHash,
      r.withdrawn_at AS withdrawnAt, r.released_by_author AS releasedByAuthor
      FROM designs d JOIN revisions r ON r.design_id = d.id WHERE d.design_key IN (?) ORDER BY r.number`,
    [[...new Set(designs)]],
  )
  const revisions = rows.map(({ documentHash, ...row }) => ({ ...row, hash: documentHash.toString('hex') }))
  const designIds = [...new Set(rows.map((row) => row.designId))]
  if (lots.length === 0 || designIds.length === 0) return { revisions, lots: [] }
  return {
    revisions,
    lots: await sql.rows<LotInPlay>(
      `SELECT design_id AS designId, lot_key AS lotKey, revision, state FROM lots
        WHERE design_id IN (?) AND lot_key IN (?) ORDER BY id LOCK IN SHARE MODE`,
      [designIds, [...new Set(lots)]],
    ),
  }
}

/** A revision's document never changes, so that what was made from it is kept by its hash. */
const designByHash = new Map<string, Design>()
const channelByHash = new Map<string, TrimChannel>()
const keptMax = 500

export async function loadDesigns(sql: Sql, hashes: readonly string[]): Promise<void> {
  const missing = [...new Set(hashes)].filter((hash) => !designByHash.has(hash))
  if (missing.length === 0) return
  const rows = await sql.rows<{ hash: Buffer; bytes: Buffer }>(
    'SELECT hash, bytes FROM design_documents WHERE hash IN (?)',
    [missing.map((hash) => Buffer.from(hash, 'hex'))],
  )
  if (designByHash.size > keptMax) designByHash.clear()
  for (const { hash, bytes } of rows) {
    designByHash.set(hash.toString('hex'), designDocument.parse(JSON.parse(bytes.toString('utf8'))))
  }
}

export function designOf(hash: string): Design {
  const design = designByHash.get(hash)
  if (!design) throw new Error(`There is no document with the hash ${hash}.`)
  return design
}

/** A channel with its adjusters, checked and prepared once for all units. */
export function channelOf(hash: string, rangeId: string): TrimChannel {
  const key = `${hash} ${rangeId}`
  const known = channelByHash.get(key)
  if (known) return known
  const made = prepareTrim(designOf(hash), rangeId)
  if (channelByHash.size > keptMax) channelByHash.clear()
  channelByHash.set(key, made)
  return made
}
