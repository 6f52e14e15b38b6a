import type { Command, Context, Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { createFile } from '../../files.ts'
import { text } from '../../option-values.ts'
import { fetchRevision, readRevision } from '../../revision.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Options = ConnectionOptions & { key: string; revision: number | 'released'; output: string | undefined }

export const designPullCommand: Command<Options> = {
  about: `Prints the exact bytes that are stored, checked against their hash.\n\n${serverAbout}`,
  arguments: [{ name: '<key>', says: 'key of the design' }],
  options: [
    { flags: '--revision <number>', says: 'revision, or the word released (default released)' },
    { flags: '--output <file>', says: 'write to a file instead of standard output', completes: 'file' },
    ...serverOptions,
  ],
  formats: [],
  examples: [
    {
      run: 'ogee design pull DBS-A > dbs-a.json',
      says: 'The highest released revision, to work offline with.',
    },
  ],
  read: readPull,
  run: pull,
}

function readPull(given: Given): Options {
  return {
    ...readConnection(given),
    key: given.args[0] ?? '',
    revision: readRevision(text(given.options.revision) ?? 'released'),
    output: text(given.options.output),
  }
}

async function pull(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  const { bytes } = await fetchRevision(client, options.key, options.revision)
  if (options.output === undefined) await context.io.write(bytes.toString('utf8'))
  else await createFile(options.output, bytes)
  return 0
}
