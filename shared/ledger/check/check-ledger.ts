import type { LedgerKeyRow, StoredCheckpoint } from '../../contract/ledger-checkpoints.ts'
import type { Stray } from '../../contract/ledger-entries.ts'
import { checkNote } from '../check-proof.ts'
import { keyName, type LedgerKey, parseVerifierKey, verifierKey } from '../checkpoint.ts'
import { type LedgerCrypto, type Sha256, toHex } from '../hash.ts'
import { keysFrom } from '../key-chain.ts'
import type { BytesAsText } from './at-sight.ts'
import { EntryChecker, type SignedRoot } from './entry-checker.ts'
import { collectFaults, type Faults, type LedgerFault } from './faults.ts'
import type { SignatureTask } from './signed-in-receipt.ts'

export type { LedgerFault } from './faults.ts'

/** Where the ledger is read from: a server, or whatever stands in for one. */
export type LedgerSource = {
  keys: () => Promise<readonly LedgerKeyRow[]>
  /** All of them, oldest first. */
  checkpoints: () => Promise<readonly StoredCheckpoint[]>
  /** Some entries from an index on, as lines, and where to go on; null at the end. */
  entries: (from: number) => Promise<{ lines: Iterable<Uint8Array>; next: number | null; size: number }>
  strays: () => Promise<readonly Stray[]>
}

/** A checkpoint that somebody kept outside of the server. `name` says where, as in "the checkpoint in old.txt". */
export type KeptNote = { name: string; note: string }

export type LedgerReport = {
  ok: boolean
  size: number
  records: number
  checkpoints: number
  kept: number
  /** How many disagreements were found; the first hundred are listed, in the order of entries. */
  found: number
  faults: LedgerFault[]
}

type Options = {
  sha256: Sha256
  asText: BytesAsText
  /** Runs a check that needs signatures: at once where they can be checked at once, else when the answers are there. */
  run: <Checked>(check: (crypto: LedgerCrypto) => Checked) => Promise<Checked>
  /** The key that is kept. */
  key: LedgerKey
  kept: readonly KeptNote[]
  /** Checks signatures of receipts, all at once; left out, they are not checked. */
  verifyAll: ((tasks: readonly SignatureTask[]) => Promise<readonly boolean[]>) | null
  onProgress: (done: number, size: number) => void
  /** Gives the event loop a turn: the next entries are asked for, and come in, while some are checked. */
  turn: () => Promise<unknown>
}

/** Lines between two turns: some milliseconds. */
const linesATurn = 200

/**
 * Reads all of a ledger and finds what disagrees: keys, checkpoints, entries, records, receipts, revisions, and rows that
 * belong to nothing.
 *
 * @param source where it is read from; nothing it says is taken on trust but under the key that is kept.
 * @returns the report; the first fault is that of the lowest entry.
 * @throws what the source throws.
 * Source: contract.md, Ledger; RFC 9162.
 * @example (await checkLedger(source, { sha256, run, key, kept: [], verifyAll: null, onProgress, turn })).ok
 */
export async function checkLedger(source: LedgerSource, options: Options): Promise<LedgerReport> {
  const { sha256, key, kept, onProgress } = options
  const keyRows = await source.keys()
  const stored = await source.checkpoints()
  const { faults, keys, roots } = await options.run((crypto) =>
    checkNotes(crypto, { key, keyRows, stored, kept }),
  )
  const how = { sha256, asText: options.asText, withReceipts: options.verifyAll !== null }
  const checker = new EntryChecker(how, keys, roots, faults)
  // Both keep the server busy while entries are checked here: it takes about as long.
  const straying = ahead(source.strays())
  let reading = source.entries(0)
  for (;;) {
    const { lines, next, size } = await reading
    if (next !== null) reading = ahead(source.entries(next))
    await takePage(checker, lines, options)
    onProgress(next ?? size, size)
    if (next === null) break
  }
  const { size, records } = checker.finish()
  checkKeys(sha256, keyRows, keys, checker.keysSeen, faults)
  for (const { message, record } of await straying) {
    faults.add({ what: 'stray', entry: null, to: null, record, message })
  }
  const found = faults.count()
  return {
    ok: found === 0,
    size,
    records,
    checkpoints: stored.length,
    kept: kept.length,
    found,
    faults: faults.list(),
  }
}

/** What is awaited later; should it fail before, that is no failure that nobody hears of. */
function ahead<T>(asked: Promise<T>): Promise<T> {
  asked.catch(() => undefined)
  return asked
}

type Notes = {
  key: LedgerKey
  keyRows: readonly LedgerKeyRow[]
  stored: readonly StoredCheckpoint[]
  kept: readonly KeptNote[]
}

/** Everything that is signed but receipts. Pure, faults included, so that it can run twice. */
function checkNotes(
  crypto: LedgerCrypto,
  { key, keyRows, stored, kept }: Notes,
): { faults: Faults; keys: LedgerKey[]; roots: SignedRoot[] } {
  const faults = collectFaults()
  const statements = keyRows.flatMap(({ statement }) => statement ?? [])
  const outside = kept.flatMap(({ name, note }) => {
    const checked = checkNote(crypto, note, key, statements)
    if ('fault' in checked) return addLoose(faults, 'checkpoint', `${name}: ${checked.message}`)
    return [{ ...checked.checkpoint, name, kept: true }]
  })
  const roots = [...storedRoots(crypto, stored, key, statements, faults), ...outside].sort(
    (a, b) => a.size - b.size || Number(a.kept) - Number(b.kept),
  )
  return { faults, keys: keysFrom(crypto, key, statements), roots }
}

async function takePage(
  checker: EntryChecker,
  lines: Iterable<Uint8Array>,
  { verifyAll, turn }: Pick<Options, 'verifyAll' | 'turn'>,
): Promise<void> {
  const tasks: SignatureTask[] = []
  let taken = 0
  for (const line of lines) {
    if (taken++ % linesATurn === 0) await turn()
    const task = checker.take(line)
    if (task) tasks.push(task)
  }
  if (!verifyAll) return
  const good = await verifyAll(tasks)
  tasks.forEach((task, i) => {
    checker.verified(task, good[i] === true)
  })
}

function storedRoots(
  crypto: LedgerCrypto,
  stored: readonly StoredCheckpoint[],
  key: LedgerKey,
  statements: Parameters<typeof keysFrom>[2],
  faults: Faults,
): SignedRoot[] {
  return stored.flatMap(({ number, size, root, note }, i) => {
    const name = `checkpoint ${number}`
    const expected = i + 1
    const before = stored[i - 1]
    if (number !== (before?.number ?? 0) + 1) {
      addLoose(faults, 'checkpoint', `Checkpoint ${(before?.number ?? 0) + 1} is missing before ${number}.`)
    } else if (before && before.size > size) {
      addLoose(
        faults,
        'checkpoint',
        `Checkpoint ${number} is over fewer entries than checkpoint ${expected - 1}.`,
      )
    }
    const checked = checkNote(crypto, note, key, statements)
    if ('fault' in checked) return addLoose(faults, 'checkpoint', `Checkpoint ${number}: ${checked.message}`)
    const signed = checked.checkpoint
    if (signed.size !== size || toHex(signed.root) !== root) {
      return addLoose(faults, 'checkpoint', `Checkpoint ${number} is stored otherwise than it was signed.`)
    }
    return [{ ...signed, name, kept: false }]
  })
}

/** The table of keys and the leaves of kind `key` tell the same story, and the kept key leads to each of them. */
function checkKeys(
  sha256: Sha256,
  rows: readonly LedgerKeyRow[],
  trusted: readonly LedgerKey[],
  inLeaves: EntryChecker['keysSeen'],
  faults: Faults,
): void {
  const vouched = new Set(trusted.map((key) => verifierKey(sha256, key)))
  const shortOf = (text: string) => {
    const key = parseVerifierKey(sha256, text)
    return key ? keyName(sha256, key) : 'something that is no key'
  }
  rows.forEach(({ number, key, at }, i) => {
    if (number !== i + 1) addLoose(faults, 'key', `Key ${i + 1} of the ledger is missing.`)
    if (inLeaves[i]?.key !== key || inLeaves[i]?.at !== at) {
      const stored = `Key ${number} is stored as ${shortOf(key)} of ${at}`
      addLoose(faults, 'key', `${stored}; the ledger says otherwise.`)
    }
    if (!vouched.has(key)) {
      addLoose(faults, 'key', `Nothing leads from the key kept here to key ${number}, ${shortOf(key)}.`)
    }
  })
  if (inLeaves.length > rows.length) {
    addLoose(faults, 'key', `The ledger has ${inLeaves.length} keys, the table of keys ${rows.length}.`)
  }
}

function addLoose(faults: Faults, what: 'checkpoint' | 'key', message: string): [] {
  faults.add({ what, entry: null, to: null, record: null, message })
  return []
}
