import type { StoredRow } from '../../contract/ledger-entries.ts'

/**
 * One line of `GET /ledger/entries`: what the database holds for one entry. The leaf stands last and as it is, so that its
 * exact bytes can be hashed without being parsed and written again; `leafBytes` says how many they are.
 */
export type EntryHead = {
  index: number
  /** Stored hashes of the subtrees that this leaf completes, lowest first, hexadecimal, put together. */
  nodes: string
  /** Stored hash of the leaf; null when there is no leaf. */
  hash: string | null
  /** The row of the table of records that belongs to the leaf. */
  row: StoredRow | null
  /** Bytes of the design revision that a release names, base64; null when they are not kept. */
  document?: string | null
}

export type Entry = EntryHead & { leaf: Uint8Array | null }

const encoder = new TextEncoder()
/** Where a leaf's bytes follow each other, a line ends with a brace. */
export const afterLeaf = '}'
const decoder = new TextDecoder()
const start = '{"leafBytes":'
const joint = ',"leaf":'

/**
 * Writes a line.
 *
 * @param head all but the leaf.
 * @param leaf canonical text of the leaf, or null.
 * @returns JSON without a line end.
 * Throws nothing of its own.
 * Source: contract.md, Ledger.
 * @example entryLine({ index: 0, nodes: '', hash: null, row: null }, null)
 */
export function entryLine(head: EntryHead, leaf: string | null): string {
  const text = leaf ?? 'null'
  const before = beforeLeaf({ ...head, row: JSON.stringify(head.row) }, encoder.encode(text).length)
  return `${before}${text}${afterLeaf}`
}

/**
 * What stands before the leaf in a line, for a server that copies its bytes behind it and never makes a text of them.
 *
 * @param head all but the leaf; `row` as JSON.
 * @param leafBytes how many bytes the leaf has.
 * @returns the beginning of a line.
 * Throws nothing of its own.
 * Source: contract.md, Ledger.
 * @example beforeLeaf({ index: 0, nodes: '', hash: null, row: 'null' }, 4)
 */
export function beforeLeaf(
  { index, nodes, hash, row, document }: Omit<EntryHead, 'row'> & { row: string },
  leafBytes: number,
): string {
  const more = document === undefined ? '' : `,"document":${JSON.stringify(document)}`
  const stored = hash === null ? 'null' : `"${hash}"`
  return `${start}${leafBytes},"index":${index},"nodes":"${nodes}","hash":${stored},"row":${row}${more}${joint}`
}

/**
 * Reads a line.
 *
 * @param line bytes without the line end.
 * @returns the entry; null when the line is none.
 * Throws nothing.
 * Source: contract.md, Ledger.
 * @example readEntry(new Uint8Array()) // null
 */
export function readEntry(line: Uint8Array): Entry | null {
  let at = start.length
  let length = 0
  for (let digit = line[at]; digit !== undefined && digit >= 0x30 && digit <= 0x39; digit = line[++at]) {
    length = length * 10 + digit - 0x30
  }
  const from = line.length - 1 - length
  if (from - joint.length <= at || decoder.decode(line.subarray(0, start.length)) !== start) return null
  try {
    const head = JSON.parse(`{${decoder.decode(line.subarray(at + 1, from - joint.length))}}`) as EntryHead
    const leaf = line.subarray(from, line.length - 1)
    return { ...head, leaf: head.hash === null ? null : leaf }
  } catch {
    return null
  }
}
