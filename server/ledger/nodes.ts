import { type ProofPart, proofHashes } from '../../shared/ledger/proof.ts'
import type { NodePlace } from '../../shared/ledger/tree.ts'
import type { Sql } from '../db/sql.ts'
import { sha256 } from './crypto.ts'

const nameOf = ({ level, index }: NodePlace) => `${level}/${index}`

/** Hashes of complete subtrees by place, all in one look-up by key. Throws when one is missing: the tree is damaged. */
export async function readNodes(
  sql: Sql,
  places: readonly NodePlace[],
): Promise<(place: NodePlace) => Buffer> {
  const rows =
    places.length === 0
      ? []
      : await sql.rows<NodeRow>(
          `SELECT level, idx AS \`index\`, hash FROM ledger_nodes WHERE ${places.map(() => '(level = ? AND idx = ?)').join(' OR ')}`,
          places.flatMap((place) => [place.level, place.index]),
        )
  const hashes = new Map(rows.map((row) => [nameOf(row), row.hash]))
  return (place) => {
    const hash = hashes.get(nameOf(place))
    if (!hash) throw new Error(`The ledger lacks the hash of level ${place.level}, index ${place.index}.`)
    return hash
  }
}

type NodeRow = { level: number; index: number; hash: Buffer }

/** The hashes of a proof from its parts: one look-up, O(log n) rows. */
export async function readProofHashes(sql: Sql, parts: readonly ProofPart[]): Promise<string[]> {
  const hashAt = await readNodes(sql, parts.flat())
  return proofHashes(sha256, parts, hashAt).map((hash) => Buffer.from(hash).toString('hex'))
}
