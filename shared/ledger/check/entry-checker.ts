import type { StoredRow } from '../../contract/ledger-entries.ts'
import type { RecordBody } from '../../contract/record.ts'
import { keyName, type LedgerKey } from '../checkpoint.ts'
import { fromBase64, type Sha256, sameBytes, toHex } from '../hash.ts'
import { leafHash } from '../leaf.ts'
import { type BytesAsText, readAtSight, type Sighted } from './at-sight.ts'
import { type Entry, readEntry } from './entry-line.ts'
import type { FaultKind, Faults } from './faults.ts'
import { type GrowingTree, growingTree } from './growing-tree.ts'
import { rowDifference } from './record-row.ts'
import { type SignatureTask, signedInReceipt } from './signed-in-receipt.ts'

/** A root that was signed over so many entries. `name` says which one, in a sentence. */
export type SignedRoot = {
  size: number
  root: Uint8Array
  name: string
  /** Kept outside of the server, and not only stored beside what it signs. */
  kept: boolean
}

type Leaf = { at: string; body: unknown; kind: string }
const decoder = new TextDecoder()

/**
 * Checks entries one after another: bytes against hash, hash against tree, tree against signed roots, row and receipt
 * against bytes. Signatures of receipts are handed out, not checked here.
 *
 * Source: contract.md, Ledger; RFC 9162. Throws nothing for bad entries.
 * @example new EntryChecker({ sha256, asText, withReceipts: true }, keys, roots, collectFaults()).finish().size // 0
 */
export class EntryChecker {
  readonly #sha256: Sha256
  readonly #asText: BytesAsText
  readonly #keys: ReadonlyMap<string, LedgerKey>
  readonly #roots: readonly SignedRoot[]
  readonly #faults: Faults
  readonly #tree: GrowingTree
  readonly #withReceipts: boolean
  #next = 0
  #records = 0
  /** Once one entry is wrong, every hash above it is too: the first says it all. */
  #treeHolds = true
  #root = 0
  /** Entries up to here lead to a signed root; and to one that was kept. */
  #signedTo = 0
  #keptTo = 0
  /** Verifier keys that leaves speak of, and when they came into force. */
  readonly keysSeen: { key: string; at: string }[] = []

  /**
   * @param how the hash function; what gives bytes as text; whether signatures of receipts are to be handed out.
   * @param keys that the ledger was signed with, all of them vouched for.
   * @param roots signed, in the order of their sizes.
   * @param faults where to report.
   */
  constructor(
    { sha256, asText, withReceipts }: { sha256: Sha256; asText: BytesAsText; withReceipts: boolean },
    keys: readonly LedgerKey[],
    roots: readonly SignedRoot[],
    faults: Faults,
  ) {
    this.#sha256 = sha256
    this.#asText = asText
    this.#keys = new Map(keys.map((key) => [keyName(sha256, key), key]))
    this.#roots = roots
    this.#faults = faults
    this.#withReceipts = withReceipts
    this.#tree = growingTree(sha256)
    this.#compareRoots()
  }

  /** Takes the next entry's line. Gives the signature that has to be verified for it. */
  take(line: Uint8Array): SignatureTask | null {
    const sighted = readAtSight(line, this.#asText)
    if (sighted?.index === this.#next) {
      const hash = leafHash(this.#sha256, sighted.leaf)
      if (toHex(hash) === sighted.hash) return this.#takeGood(line, sighted, hash)
    }
    return this.#takeAny(readEntry(line))
  }

  #takeGood(line: Uint8Array, { nodes, hash, record }: Sighted, bytes: Uint8Array): SignatureTask | null {
    const entry = this.#withReceipts ? readEntry(line) : null
    // Behind what was seen stands the receipt: a line that cannot be parsed for it is not good.
    if (this.#withReceipts && !entry?.row) return this.#takeAny(entry)
    this.#grow(bytes, nodes, record)
    this.#records++
    const task = entry?.row ? this.#receiptOf(entry.row, hash) : null
    this.#next++
    return task
  }

  #takeAny(entry: Entry | null): SignatureTask | null {
    if (entry === null) {
      this.#treeHolds = false
      this.#fault('entry-unreadable', `Entry ${this.#next} cannot be read.`)
      this.#next++
      return null
    }
    if (entry.index !== this.#next) this.#missing(entry.index)
    const task = this.#check(entry)
    this.#next++
    return task
  }

  /** What came of a signature. */
  verified({ entry, record }: SignatureTask, isGood: boolean): void {
    if (isGood) return
    const message = `Entry ${entry}: the receipt of record ${record} is not signed by the ledger.`
    this.#faults.add({ what: 'receipt', entry, to: entry, record, message })
  }

  /** All entries were taken: a root over more of them is over some that are gone. */
  finish(): { size: number; records: number } {
    const size = this.#next
    const beyond = this.#roots.slice(this.#root).find((one) => one.size > size)
    if (beyond) {
      const message = `The ledger ends after ${size} entries; ${beyond.name} is over ${beyond.size}.`
      this.#fault('cut', message, null, size, beyond.size - 1)
    }
    return { size, records: this.#records }
  }

  #fault(
    what: FaultKind,
    message: string,
    record: string | null = null,
    entry = this.#next,
    to = entry,
  ): null {
    this.#faults.add({ what, entry, to, record, message })
    return null
  }

  #missing(until: number): void {
    this.#treeHolds = false
    const to = until - 1
    const which = to === this.#next ? `Entry ${to} is` : `Entries ${this.#next} to ${to} are`
    this.#fault('entry-missing', `${which} missing.`, null, this.#next, to)
    this.#next = until
  }

  #check(entry: Entry): SignatureTask | null {
    const record = entry.row?.id ?? null
    const at = `Entry ${this.#next}`
    const hash = entry.leaf && leafHash(this.#sha256, entry.leaf)
    if (!entry.leaf || !hash || toHex(hash) !== entry.hash) {
      this.#treeHolds = false
      return entry.leaf
        ? this.#fault('hash', `${at}: its bytes do not have the hash that is stored.`, record)
        : this.#fault('leaf-missing', `${at} has no leaf any more.`, record)
    }
    this.#grow(hash, entry.nodes, record)
    try {
      const leaf = JSON.parse(decoder.decode(entry.leaf)) as Leaf
      return leaf.kind === 'record' ? this.#checkRecord(entry, leaf) : this.#checkOther(entry, leaf)
    } catch {
      return this.#fault('hash', `${at}: its bytes are no leaf of this format.`, record)
    }
  }

  #grow(hash: Uint8Array, nodes: string, record: string | null): void {
    if (!this.#treeHolds) return
    const level = this.#tree.add(hash, nodes)
    if (level === null) {
      this.#compareRoots()
      return
    }
    this.#treeHolds = false
    const to = this.#next
    const from = to + 1 - 2 ** level
    const which = level === 0 ? `Entry ${to} has` : `Entries ${from} to ${to} have`
    this.#fault('tree', `${which} another hash in the stored tree.`, record, from, to)
  }

  #compareRoots(): void {
    const size = this.#tree.size
    for (let one = this.#roots[this.#root]; one && one.size <= size; one = this.#roots[++this.#root]) {
      if (one.size < size) continue
      if (!sameBytes(this.#tree.root(), one.root)) {
        this.#treeHolds = false
        // What is stored may have been signed anew after history was rewritten: it vouches for nothing that was kept.
        const first = one.kept ? this.#keptTo : this.#signedTo
        const which = first + 1 === size ? `Entry ${first} does` : `Entries ${first} to ${size - 1} do`
        this.#fault('root', `${which} not lead to the root of ${one.name}.`, null, first, size - 1)
        return
      }
      this.#signedTo = size
      if (one.kept) this.#keptTo = size
    }
  }

  #checkRecord(entry: Entry, leaf: Leaf): SignatureTask | null {
    const { row } = entry
    const body = leaf.body as RecordBody
    const at = `Entry ${this.#next}, record`
    this.#records++
    if (!row) return this.#fault('row-missing', `${at} ${body.id}: the table of records lacks it.`, body.id)
    const differs = rowDifference(row, body)
    if (differs !== null) return this.#fault('row', `${at} ${row.number}: ${differs}.`, body.id)
    return this.#receiptOf(row, entry.hash ?? '')
  }

  #receiptOf(row: StoredRow, hash: string): SignatureTask | null {
    if (!this.#withReceipts) return null
    const signed = signedInReceipt(this.#sha256, this.#keys, row, { index: this.#next, hash })
    return 'wrong' in signed ? this.#fault('receipt', signed.wrong, row.id) : signed
  }

  #checkOther(entry: Entry, { kind, body, at: time }: Leaf): null {
    const at = `Entry ${this.#next}`
    if (entry.row) {
      this.#fault('row', `${at} is a ${kind}, and record ${entry.row.number} stands on it.`, entry.row.id)
    }
    if (kind === 'key') this.keysSeen.push({ key: (body as { key: string }).key, at: time })
    if (kind !== 'release') return null
    const { design, revision, hash } = body as { design: string; revision: number; hash: string }
    const bytes = entry.document ? fromBase64(entry.document) : null
    if (bytes && toHex(this.#sha256(bytes)) === hash) return null
    const how = bytes ? 'are not those that were released' : 'are gone'
    return this.#fault('document', `${at}: the bytes of ${design}, revision ${revision}, ${how}.`)
  }
}
