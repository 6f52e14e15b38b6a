import { getProof } from '../../../shared/contract/ledger.ts'
import { recordId } from '../../../shared/contract/primitives.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Command, Context, Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { createFile } from '../../files.ts'
import { text } from '../../option-values.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Options = ConnectionOptions & { record: string; output: string | undefined }

export const proofGetCommand: Command<Options> = {
  about: `Prints one file that shows, together with the public key, that the record stands in the ledger.\n\n${serverAbout}`,
  arguments: [{ name: '<record>', says: 'id of the record, as `ogee history` gives it' }],
  options: [
    { flags: '--output <file>', says: 'write to a file instead of standard output', completes: 'file' },
    ...serverOptions,
  ],
  formats: [],
  examples: [
    {
      run: 'ogee proof get 01890a5d-ac96-774b-bcce-b302099a8057 > record.proof.json',
      says: 'The proof of one record, to keep with the unit.',
    },
  ],
  read: (given) => ({
    ...readConnection(given),
    record: readRecordId(given),
    output: text(given.options.output),
  }),
  run: get,
}

function readRecordId({ args }: Given): string {
  const parsed = recordId.safeParse(args[0])
  if (parsed.success) return parsed.data
  throw new OgeeError(
    'usage',
    `${args[0] ?? ''} is no id of a record. \`ogee history --format csv\` lists them as the last column.`,
  )
}

async function get(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  const proof = await client.call(getProof, { params: { recordId: options.record } })
  const file = `${JSON.stringify(proof, null, 2)}\n`
  if (options.output === undefined) await context.io.write(file)
  else await createFile(options.output, Buffer.from(file))
  return 0
}
