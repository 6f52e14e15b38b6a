import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { getCheckpoint, getConsistency } from '../../../shared/contract/ledger.ts'
import { listKeys } from '../../../shared/contract/ledger-checkpoints.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { consistencyFault } from '../../../shared/ledger/check-consistency-proof.ts'
import { checkNote } from '../../../shared/ledger/check-proof.ts'
import type { Checkpoint, LedgerKey } from '../../../shared/ledger/checkpoint.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { crypto } from '../../ledger/crypto.ts'
import { readKept } from '../../ledger/kept-notes.ts'
import { keyFor, keyOption } from '../../ledger/key-options.ts'
import { text } from '../../option-values.ts'
import { print, type Rendering } from '../../output.ts'
import { connectOpen, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { pairs } from '../../table.ts'

type Options = ConnectionOptions & { older: string; newer: string | undefined; key: string | undefined }
type Answer = { from: number; to: number; hashes: number; fault: string | null }

export const ledgerConsistencyCommand: Command<Options> = {
  about:
    'Shows that the ledger of an older checkpoint is the beginning of a newer one, from some dozen hashes. Ends with 16\n' +
    `when it is not: then history was rewritten. Needs no token.\n\n${serverAbout}`,
  arguments: [
    { name: '<older>', says: 'file with a checkpoint kept from before; of several, the last' },
    { name: '[newer]', says: 'file with another (default: the newest of the server)' },
  ],
  options: [keyOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee ledger consistency checkpoint.txt --key ogee.pub',
      says: 'Whether what was signed then still stands.',
    },
  ],
  read: (given) => ({
    ...readConnection(given),
    older: given.args[0] ?? '',
    newer: given.args[1],
    key: text(given.options.key),
  }),
  run: consistency,
}

async function consistency(options: Options, context: Context): Promise<number> {
  const client = await connectOpen(options, context)
  const key = await keyFor(options.key, client)
  const older = (await readKept(context.io, options.older)).at(-1)!
  const newer = options.newer === undefined ? null : (await readKept(context.io, options.newer)).at(-1)!
  const note = newer?.note ?? (await client.call(getCheckpoint, {}))
  const notes = [
    { name: older.name, note: older.note },
    { name: newer?.name ?? "The server's newest checkpoint", note },
  ]
  const answer = await compare(client, key, notes)
  await print(rendering(answer), context)
  return answer.fault === null ? 0 : proofFailsExit
}

async function compare(
  client: Client,
  key: LedgerKey,
  notes: readonly { name: string; note: string }[],
): Promise<Answer> {
  const { items } = await client.call(listKeys, {})
  const statements = items.flatMap(({ statement }) => statement ?? [])
  const checkpoints: Checkpoint[] = []
  for (const { name, note } of notes) {
    const checked = checkNote(crypto, note, key, statements)
    if ('fault' in checked) return { from: 0, to: 0, hashes: 0, fault: `${name}: ${checked.message}` }
    checkpoints.push(checked.checkpoint)
  }
  const [from, to] = checkpoints as [Checkpoint, Checkpoint]
  const sizes = { from: from.size, to: to.size }
  const needsProof = from.size > 0 && from.size <= to.size
  const proof = needsProof ? await proofBetween(client, sizes) : null
  if (typeof proof === 'string') return { ...sizes, hashes: 0, fault: proof }
  return { ...sizes, hashes: proof?.path.length ?? 0, fault: consistencyFault(crypto, from, to, proof) }
}

/** A server that cannot prove what was signed has lost it. */
async function proofBetween(client: Client, sizes: { from: number; to: number }) {
  try {
    return await client.call(getConsistency, { query: sizes })
  } catch (error) {
    if (error instanceof OgeeError && error.code === 'invalid-request') return error.message
    throw error
  }
}

function rendering({ from, to, hashes, fault }: Answer): Rendering {
  const ok = fault === null
  const facts: [string, string][] = [
    ['From', `${from} entries`],
    ['To', `${to} entries`],
    ['Proof', `${hashes} hashes`],
  ]
  return {
    json: { format: 'ogee.consistency-check/1', ok, from, to, hashes, message: fault },
    table: () =>
      ok
        ? `✓ checks: the newer ledger begins with the older one\n${pairs(facts)}`
        : `✕ does not check\n${fault}\nTell whoever keeps the ledger.\n`,
    csv: { heads: ['ok', 'from', 'to', 'hashes', 'message'], rows: [[String(ok), from, to, hashes, fault]] },
  }
}
