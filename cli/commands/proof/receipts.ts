import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { getProof } from '../../../shared/contract/ledger.ts'
import type { Receipt } from '../../../shared/contract/receipt.ts'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import { type CheckedReceipt, checkIncluded } from '../../../shared/ledger/check-receipt.ts'
import type { LedgerKey } from '../../../shared/ledger/checkpoint.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { crypto } from '../../ledger/crypto.ts'
import { keyFor, keyOption } from '../../ledger/key-options.ts'
import { type FoundReceipt, findReceipts } from '../../ledger/receipt-files.ts'
import { text } from '../../option-values.ts'
import { print, type Rendering } from '../../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { textTable } from '../../table.ts'

type Options = ConnectionOptions & { folder: string; key: string | undefined }
type Line = { file: string; record: string; checked: CheckedReceipt }

export const proofReceiptsCommand: Command<Options> = {
  about:
    'Looks at every receipt below sent/ of a spool folder, or at every one in a folder without sent/, and asks the server\n' +
    'for the proof that its record stands in the ledger. Ends with 16 when one does not check.\n' +
    `Give --key: a server that lies about its records may lie about its key too.\n\n${serverAbout}`,
  arguments: [{ name: '<folder>', says: 'spool folder, or any folder with receipts' }],
  options: [keyOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee proof receipts spool --key ogee.pub',
      says: 'Whether everything that this station sent is in the ledger.',
    },
  ],
  read: (given) => ({
    ...readConnection(given),
    folder: given.args[0] ?? '',
    key: text(given.options.key),
  }),
  run: receipts,
}

async function receipts(options: Options, context: Context): Promise<number> {
  const found = await findReceipts(options.folder)
  if (found.length === 0) throw new OgeeError('input-missing', `There is no receipt in ${options.folder}.`)
  const client = await connect(options, context)
  const key = await keyFor(options.key, client)
  const lines: Line[] = []
  for (const one of found) {
    lines.push({
      file: one.file,
      record: one.receipt.record,
      checked: await checkOne(client, key, one, context),
    })
    if (context.io.stderrIsTerminal) context.io.say(`ogee: ${lines.length} of ${found.length} receipts`)
  }
  await print(rendering(lines), context)
  return lines.every(({ checked }) => checked.ok) ? 0 : proofFailsExit
}

async function checkOne(
  client: Client,
  key: LedgerKey,
  { receipt }: FoundReceipt,
  { io }: Context,
): Promise<CheckedReceipt> {
  try {
    const proof = await client.call(getProof, { params: { recordId: receipt.record } })
    return checkIncluded(crypto, receipt, proof, key)
  } catch (error) {
    if (isOgeeError(error, 'not-found')) return missing(receipt)
    if (!isOgeeError(error, 'not-in-ledger-yet') || io.now() < Date.parse(receipt.includedBy)) throw error
    return missing(receipt)
  }
}

const missing = (receipt: Receipt): CheckedReceipt => ({
  ok: false,
  fault: 'missing',
  message: `The record is not in the ledger, as was promised by ${receipt.includedBy}.`,
})

function rendering(lines: readonly Line[]): Rendering {
  const flat = lines.map(({ file, record, checked }) =>
    checked.ok
      ? { file, record, ok: true, index: checked.index, size: checked.size }
      : { file, record, ok: false, fault: checked.fault, message: checked.message },
  )
  const cells = lines.map(({ file, record, checked }) => [
    file,
    record,
    String(checked.ok),
    checked.ok ? checked.index : null,
    checked.ok ? null : checked.message,
  ])
  const bad = lines.filter(({ checked }) => !checked.ok).length
  const inAll = bad === 0 ? 'all in the ledger' : `${bad} of them not in the ledger`
  return {
    json: { format: 'ogee.receipts-check/1', ok: bad === 0, receipts: flat },
    lines: flat,
    table: () =>
      `${textTable(
        [
          { head: 'File' },
          { head: 'Record' },
          { head: 'Checks' },
          { head: 'Entry', right: true },
          { head: 'Why not' },
        ],
        cells.map(([file, record, ok, ...more]) => [
          file,
          record,
          ok === 'true' ? '✓ checks' : '✕ does not',
          ...more,
        ]),
      )}${lines.length} receipts, ${inAll}.\n`,
    csv: { heads: ['file', 'record', 'ok', 'index', 'message'], rows: cells },
  }
}
