import { sha256 } from '../../server/ledger/crypto.ts'
import type { Proof } from '../../shared/contract/proof.ts'
import { canonicalBytes, type Json } from '../../shared/ledger/canonical.ts'
import { entryLine } from '../../shared/ledger/check/entry-line.ts'
import { keyName, signCheckpoint, verifierKey } from '../../shared/ledger/checkpoint.ts'
import { toBase64, toHex } from '../../shared/ledger/hash.ts'
import { type LeafKind, leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { inclusionParts, proofHashes } from '../../shared/ledger/proof.ts'
import { signReceipt } from '../../shared/ledger/receipt.ts'
import { appendLeaves, rootOf } from '../../shared/ledger/tree.ts'
import { testKey } from './server-crypto.ts'

type Leaf = { kind: LeafKind; at: string; body: Json }
type RecordBody = { id: string; recordedAt: string; [field: string]: unknown }

/** A whole ledger in memory: its key, leaves, tree and notes, for checkers that must not need a server. */
export function memoryLedger(records: readonly RecordBody[], signer = testKey()) {
  const first: Leaf = {
    kind: 'key',
    at: '2026-01-01T00:00:00.000Z',
    body: { format: 'ogee.key/1', key: verifierKey(sha256, signer.key), replaces: null },
  }
  const leaves = [
    first,
    ...records.map((body): Leaf => ({ kind: 'record', at: body.recordedAt, body: body as unknown as Json })),
  ].map((leaf) => {
    const body = canonicalBytes(leaf.body)
    return { ...leaf, bytes: body, hash: leafHash(sha256, leafBytes(leaf.kind, leaf.at, body)) }
  })
  const { added, peaks, size } = appendLeaves(
    sha256,
    0,
    [],
    leaves.map((leaf) => leaf.hash),
  )
  const nodes = new Map(added.map((node) => [`${node.level}/${node.index}`, node.hash]))
  const checkpoint = { origin: signer.key.name, size, root: rootOf(sha256, peaks) }
  const note = signCheckpoint(sha256, checkpoint, signer.key, signer.sign)
  return {
    signer,
    leaves,
    note,
    pub: `${verifierKey(sha256, signer.key)}\n`,
    /** What a server answers about a ledger that holds its key and nothing else. */
    answers: {
      keys: {
        items: [{ number: 1, key: verifierKey(sha256, signer.key), at: first.at, statement: null }],
      },
      checkpoints: {
        items: [{ number: 1, size, root: toHex(checkpoint.root), at: first.at, note }],
        next: null,
      },
      entries: `${leaves
        .map(({ kind, at, bytes, hash }, index) => {
          const text = new TextDecoder().decode(leafBytes(kind, at, bytes))
          return `${entryLine({ index, nodes: toHex(hash), hash: toHex(hash), row: null }, text)}\n`
        })
        .join('')}${JSON.stringify({ end: true, size, next: null })}\n`,
      consistency: {
        format: 'ogee.consistency/1',
        from: { size, root: toHex(checkpoint.root) },
        to: { size, root: toHex(checkpoint.root) },
        path: [],
      },
    },
    /** Of the record at that place of the list given. */
    proofOf: (record: number): Proof => {
      const index = record + 1
      const leaf = leaves[index]!
      const hashAt = ({ level, index: at }: { level: number; index: number }) => nodes.get(`${level}/${at}`)!
      return {
        format: 'ogee.proof/1',
        record: toBase64(leaf.bytes),
        leaf: toHex(leaf.hash),
        index,
        path: proofHashes(sha256, inclusionParts(index, size), hashAt).map(toHex),
        checkpoint: note,
      }
    },
    receiptOf: (record: number) => {
      const { id, recordedAt } = records[record]!
      const promised = { record: id, leaf: toHex(leaves[record + 1]!.hash), recordedAt }
      return signReceipt(promised, keyName(sha256, signer.key), signer.sign)
    },
  }
}

/** Bodies that are enough for a proof: an id, a time, something to change. */
export function plainBodies(count: number): RecordBody[] {
  return Array.from({ length: count }, (_, i) => ({
    format: 'ogee.record/1',
    id: `01890a5d-ac96-774b-bcce-${String(i).padStart(12, '0')}`,
    recordedAt: new Date(Date.UTC(2026, 2, 2, 14, 9, 40, i)).toISOString(),
    unit: String(31 + i).padStart(3, '0'),
    number: 1_004_317 + i,
    verdict: 'ok',
  }))
}
