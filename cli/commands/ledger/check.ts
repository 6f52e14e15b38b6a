import { join } from 'node:path'
import { setImmediate } from 'node:timers/promises'
import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { checkLedger, type LedgerReport } from '../../../shared/ledger/check/check-ledger.ts'
import type { LedgerFault } from '../../../shared/ledger/check/faults.ts'
import { serverSource } from '../../../shared/ledger/check/server-source.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import type { Io } from '../../io.ts'
import { keptFetch } from '../../kept-fetch.ts'
import { checkFolder } from '../../ledger/check-folder.ts'
import { asText, crypto } from '../../ledger/crypto.ts'
import { names } from '../../ledger/export-folder.ts'
import { readKept } from '../../ledger/kept-notes.ts'
import { keyFor, keyOption } from '../../ledger/key-options.ts'
import { readKey } from '../../ledger/read-files.ts'
import { verifyAll } from '../../ledger/verify-all.ts'
import { text } from '../../option-values.ts'
import { print, type Rendering } from '../../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { pairs } from '../../table.ts'

type Options = ConnectionOptions & {
  folder: string | undefined
  key: string | undefined
  against: readonly string[]
  receipts: boolean
}

export const ledgerCheckCommand: Command<Options> = {
  about:
    'Reads everything and computes it again: leaves, tree, checkpoints, records, receipts, revisions. Ends with 16 and\n' +
    'names the first entry that disagrees. Give the key and a checkpoint that were kept elsewhere: what was rewritten\n' +
    'together with its checkpoints contradicts only those. Needs the scope ledger:read.\n\n' +
    'With a folder, checks what `ogee ledger export` wrote into it, without any server; --against needs the server.\n\n' +
    serverAbout,
  arguments: [{ name: '[folder]', says: 'exported folder to check in place of the server' }],
  options: [
    {
      flags: '--against <file...>',
      says: 'checkpoints kept from before, which the ledger must still contain',
      completes: 'file',
    },
    { flags: '--no-receipts', says: 'leave out the signatures of receipts, which take longest' },
    keyOption,
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee ledger check --key ogee.pub --against checkpoint.txt',
      says: 'Whether anything was changed, removed or put in.',
    },
  ],
  read: (given) => ({
    ...readConnection(given),
    folder: given.args[0],
    key: text(given.options.key),
    against: Array.isArray(given.options.against) ? given.options.against : [],
    receipts: given.options.receipts !== false,
  }),
  run: check,
}

async function check(options: Options, context: Context): Promise<number> {
  if (options.folder !== undefined) return await checkExported(options.folder, options, context)
  // One for the entries, one for what belongs to none of them.
  const client = await connect(options, context, keptFetch(2))
  const key = await keyFor(options.key, client)
  const kept = (await Promise.all(options.against.map((path) => readKept(context.io, path)))).flat()
  const report = await checkLedger(serverSource(client), {
    sha256: crypto.sha256,
    asText,
    run: async (check) => check(crypto),
    key,
    kept,
    verifyAll: options.receipts ? verifyAll : null,
    onProgress: progress(context.io),
    turn: setImmediate,
  })
  await print(rendering(report, key.name), context)
  return report.ok ? 0 : proofFailsExit
}

async function checkExported(
  folder: string,
  { key, ...options }: Options,
  context: Context,
): Promise<number> {
  refuseForFolder(folder, options)
  const own = join(folder, names.key)
  if (key === undefined) {
    context.io.say(
      `ogee: ${own} is taken at its word, and came with what it vouches for. Give the key that you kept with --key.`,
    )
  }
  const report = await checkFolder(context.io, folder, await readKey(key ?? own))
  const { ok, records, revisions, checkpoints, found, faults } = report
  const facts: [string, string][] = [
    ['Records', `${records}, under ${revisions} revisions`],
    ['Checkpoints', String(checkpoints)],
  ]
  const bad = faults.slice(0, shown).map((fault) => `  ${fault}\n`)
  await print(
    {
      json: { format: 'ogee.export-check/1', first: faults[0] ?? null, ...report },
      table: () =>
        ok
          ? `✓ checks: everything agrees\n${pairs(facts)}`
          : `✕ does not check, ${found} in all:\n${bad.join('')}${pairs(facts)}`,
      csv: { heads: ['message'], rows: faults.map((fault) => [fault]) },
    },
    context,
  )
  return ok ? 0 : proofFailsExit
}

/** A folder holds inclusion proofs and no whole tree: two checkpoints of different sizes cannot be compared with it. */
function refuseForFolder(folder: string, { against, receipts }: Pick<Options, 'against' | 'receipts'>): void {
  const [kept] = against
  if (kept !== undefined) {
    throw new OgeeError(
      'usage',
      `--against does not go with a folder, which holds no whole ledger. Compare with the server, the older one first: ogee ledger consistency ${kept} ${join(folder, names.checkpoints)}`,
    )
  }
  if (!receipts) {
    throw new OgeeError('usage', '--no-receipts does not go with a folder, which holds none. Leave it out.')
  }
}

/** A line a second, on a terminal only. */
function progress(io: Io): (done: number, size: number) => void {
  let said = io.now()
  return (done, size) => {
    if (!io.stderrIsTerminal || io.now() - said < 1_000) return
    said = io.now()
    io.say(`ogee: ${done} of ${size} entries`)
  }
}

function rendering(report: LedgerReport, ledger: string): Rendering {
  const [first] = report.faults
  return {
    json: { format: 'ogee.ledger-check/1', ledger, first: first ?? null, ...report },
    lines: first ? report.faults : [{ ok: true, ledger, size: report.size, records: report.records }],
    table: () => table(report, ledger),
    csv: {
      heads: ['what', 'entry', 'to', 'record', 'message'],
      rows: report.faults.map((fault) => [fault.what, fault.entry, fault.to, fault.record, fault.message]),
    },
  }
}

const shown = 20

function table(
  { ok, size, records, checkpoints, kept, found, faults }: LedgerReport,
  ledger: string,
): string {
  const facts: [string, string][] = [
    ['Ledger', ledger],
    ['Entries', `${size}, of them ${records} records`],
    ['Checkpoints', `${checkpoints} stored, ${kept} kept elsewhere`],
  ]
  if (ok) return `✓ checks: everything agrees\n${pairs(facts)}`
  const lines = faults.slice(0, shown).map(({ message }: LedgerFault) => `  ${message}\n`)
  const more = found > shown ? `  and ${found - shown} more\n` : ''
  return `✕ does not check, first:\n${lines.join('')}${more}${pairs(facts)}Tell whoever keeps the ledger.\n`
}
