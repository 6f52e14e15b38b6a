import { proofFailsExit } from '../../../shared/contract/exit.ts'
import { type CheckedProof, checkProof } from '../../../shared/ledger/check-proof.ts'
import type { Command, Context } from '../../command.ts'
import { crypto } from '../../ledger/crypto.ts'
import { readJson, readKey } from '../../ledger/read-files.ts'
import { text } from '../../option-values.ts'
import { print, type Rendering } from '../../output.ts'
import { pairs } from '../../table.ts'

type Options = { file: string; key: string }

export const proofCheckCommand: Command<Options> = {
  about:
    'Needs the two files and nothing else: no server, no network. Ends with 16 when the proof does not check.',
  arguments: [{ name: '<file>', says: 'proof, as `ogee proof get` gives it (- for standard input)' }],
  options: [
    {
      flags: '--key <file>',
      says: "the ledger's public key, such as ogee.pub, kept from before",
      required: true,
      completes: 'file',
    },
  ],
  formats: ['table', 'json', 'csv', 'ndjson'],
  examples: [
    {
      run: 'ogee proof check proof.json --key ogee.pub',
      says: 'Whether the record stands in the ledger that this key signs.',
    },
  ],
  read: ({ args, options }) => ({ file: args[0] ?? '', key: text(options.key) ?? '' }),
  run: check,
}

async function check(options: Options, context: Context): Promise<number> {
  const key = await readKey(options.key)
  const checked = checkProof(crypto, await readJson(context.io, options.file), key)
  await print(rendering(checked), context)
  return checked.ok ? 0 : proofFailsExit
}

const distrust = 'Do not rely on this record. Tell whoever keeps the ledger.'

function rendering(checked: CheckedProof): Rendering {
  const line = checked.ok
    ? {
        ok: true,
        record: checked.recordId,
        recordedAt: checked.recordedAt,
        index: checked.index,
        size: checked.checkpoint.size,
        ledger: checked.checkpoint.origin,
        signedBy: checked.signedBy,
      }
    : { ok: false, fault: checked.fault, message: checked.message }
  return {
    json: { format: 'ogee.proof-check/1', ...line },
    table: () => (checked.ok ? goodTable(checked) : `✕ does not check\n${checked.message}\n${distrust}\n`),
    csv: {
      heads: ['ok', 'record', 'recorded_at', 'index', 'size', 'signed_by', 'fault', 'message'],
      rows: [
        checked.ok
          ? ['true', line.record, line.recordedAt, line.index, line.size, line.signedBy, null, null]
          : ['false', null, null, null, null, null, checked.fault, checked.message],
      ],
    },
  }
}

function goodTable(checked: Extract<CheckedProof, { ok: true }>): string {
  const { unit, number, verdict } = JSON.parse(checked.record) as Record<string, unknown>
  const rows: [string, string][] = [
    [
      'Record',
      `${String(number ?? checked.recordId)}, unit ${String(unit ?? '–')}, ${String(verdict ?? '–')}`,
    ],
    ['Id', checked.recordId],
    ['Recorded', checked.recordedAt],
    ['Entry', `${checked.index} of ${checked.checkpoint.size}`],
    ['Signed by', checked.signedBy],
  ]
  return `✓ checks\n${pairs(rows)}`
}
