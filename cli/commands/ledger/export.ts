import fs from 'node:fs'
import { join } from 'node:path'
import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { getProof } from '../../../shared/contract/ledger.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { serverSource } from '../../../shared/ledger/check/server-source.ts'
import { checkProof } from '../../../shared/ledger/check-proof.ts'
import { type LedgerKey, verifierKey } from '../../../shared/ledger/checkpoint.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { createFile } from '../../files.ts'
import { filterOptions, type HistoryQuery, historyPages, readFilters } from '../../history-filters.ts'
import { crypto } from '../../ledger/crypto.ts'
import { designName, lineFile, makeExportFolder, names, readme } from '../../ledger/export-folder.ts'
import { keyFor, keyOption } from '../../ledger/key-options.ts'
import { text } from '../../option-values.ts'
import { print } from '../../output.ts'
import { fetchRevision } from '../../revision.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { pairs } from '../../table.ts'

type Options = ConnectionOptions & { folder: string; query: HistoryQuery; key: string | undefined }
type Exported = { records: number; revisions: number; fault: string | null }

export const ledgerExportCommand: Command<Options> = {
  about:
    'Writes records, their proofs, every checkpoint, the key, the design revisions and this program into one folder, which\n' +
    'needs no server to be checked. Each proof is checked before it is written; one that fails ends the export with 16.\n' +
    `Needs the scopes trims:read or trims:read-all, ledger:read and designs:read.\n\n${serverAbout}`,
  arguments: [{ name: '<folder>', says: 'folder to make; one that is there must be empty' }],
  options: [...filterOptions, keyOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee ledger export lot-2417 --lot 2417 --key ogee.pub',
      says: 'All that is needed to check a lot in twenty years.',
    },
  ],
  read: (given) => ({
    ...readConnection(given),
    folder: given.args[0] ?? '',
    query: readFilters(given.options),
    key: text(given.options.key),
  }),
  run: exportLedger,
}

/** Proofs asked for at once. */
const width = 8

async function exportLedger(options: Options, context: Context): Promise<number> {
  const { folder } = options
  const program = ownFile()
  const client = await connect(options, context)
  const key = await keyFor(options.key, client)
  makeExportFolder(folder)
  const exported = await exportRecords(client, key, options, context)
  const { keys, checkpoints } = serverSource(client)
  const statements = (await keys()).flatMap(({ statement }) => statement ?? [])
  const notes = (await checkpoints()).map(({ note }) => note)
  const write = (name: string, content: string | Uint8Array) =>
    createFile(join(folder, name), Buffer.from(content as string))
  await write(names.checkpoints, notes.join(''))
  await write(names.keys, `${JSON.stringify(statements, null, 2)}\n`)
  await write(names.key, `${verifierKey(crypto.sha256, key)}\n`)
  await write(names.program, program)
  await write(names.readme, readme(exported.records, key.name))
  const { records, revisions, fault } = exported
  await print(
    {
      json: {
        format: 'ogee.ledger-export/1',
        folder,
        ok: fault === null,
        records,
        revisions,
        message: fault,
      },
      table: () =>
        pairs([
          ['Folder', folder],
          ['Records', String(records)],
          ['Revisions', String(revisions)],
          ['Checkpoints', String(notes.length)],
          ['Proofs', fault ?? 'each checked'],
        ]),
      csv: {
        heads: ['folder', 'records', 'revisions', 'message'],
        rows: [[folder, records, revisions, fault]],
      },
    },
    context,
  )
  return fault === null ? 0 : proofFailsExit
}

async function exportRecords(
  client: Client,
  key: LedgerKey,
  { folder, query }: Options,
  { io }: Context,
): Promise<Exported> {
  const records = lineFile(join(folder, names.records))
  const proofs = lineFile(join(folder, names.proofs))
  const revisions = new Set<string>()
  let count = 0
  for await (const { items } of historyPages(client, { query, limit: Number.MAX_SAFE_INTEGER })) {
    for (let from = 0; from < items.length; from += width) {
      const some = items.slice(from, from + width)
      const found = await Promise.all(
        some.map(({ id }) => client.call(getProof, { params: { recordId: id } })),
      )
      for (const [i, proof] of found.entries()) {
        const checked = checkProof(crypto, proof, key)
        const { id, number, design, revision } = some[i]!
        if (!checked.ok || checked.recordId !== id) {
          const why = checked.ok ? 'The proof is of another record.' : checked.message
          return { records: count, revisions: revisions.size, fault: `Record ${number}: ${why}` }
        }
        records.add(checked.record)
        proofs.add(JSON.stringify(proof))
        count++
        const name = designName(design, revision)
        if (revisions.has(name)) continue
        revisions.add(name)
        const { bytes } = await fetchRevision(client, design, revision)
        await createFile(join(folder, names.designs, name), bytes)
      }
    }
    if (io.stderrIsTerminal) io.say(`ogee: ${count} records`)
  }
  records.close()
  proofs.close()
  return { records: count, revisions: revisions.size, fault: null }
}

/** This very program, which is one file that runs alone once it is built. */
function ownFile(): Uint8Array {
  const path = fs.realpathSync(process.argv[1] ?? '')
  if (path.endsWith('.mjs')) return fs.readFileSync(path)
  throw new OgeeError('configuration', 'The program is not built: run npm run build, then dist/cli/ogee.mjs.')
}
