import { getDesign } from '../../../shared/contract/designs.ts'
import { type Command, type Context, everyFormat, type Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { print } from '../../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { textTable } from '../../table.ts'

type Options = ConnectionOptions & { key: string }

export const designShowCommand: Command<Options> = {
  about: serverAbout,
  arguments: [{ name: '<key>', says: 'key of the design' }],
  options: serverOptions,
  formats: everyFormat,
  examples: [{ run: 'ogee design show DBS-A', says: 'Its revisions, who released them, their hashes.' }],
  read: (given: Given) => ({ ...readConnection(given), key: given.args[0] ?? '' }),
  run: show,
}

async function show(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  const design = await client.call(getDesign, { params: { key: options.key } })
  const rows = design.revisions.map((revision) => [
    revision.number,
    revision.state,
    revision.author,
    revision.releasedBy,
    revision.releasedAt,
    revision.hash,
    revision.title,
    revision.etag,
  ])
  await print(
    {
      json: { format: 'ogee.design-line/1', ...design },
      lines: design.revisions,
      table: () =>
        textTable(
          ['Revision', 'State', 'Author', 'Released by', 'Released', 'SHA-256', 'Title', 'ETag'].map(
            (head, i) => ({
              head,
              right: i === 0,
            }),
          ),
          rows,
        ),
      csv: {
        heads: ['revision', 'state', 'author', 'released_by', 'released_at', 'hash', 'title', 'etag'],
        rows,
      },
    },
    context,
  )
  return 0
}
