import { type DesignLine, listDesigns } from '../../../shared/contract/designs.ts'
import { limits } from '../../../shared/limits.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { print } from '../../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { textTable } from '../../table.ts'

export const designListCommand: Command<ConnectionOptions> = {
  about: serverAbout,
  options: serverOptions,
  formats: everyFormat,
  examples: [{ run: 'ogee design list', says: 'Keys, titles and the highest released revision.' }],
  read: readConnection,
  run: list,
}

async function list(options: ConnectionOptions, context: Context): Promise<number> {
  const client = await connect(options, context)
  const items: DesignLine[] = []
  let after: string | null | undefined
  do {
    const query = { limit: limits.pageMax, ...(after ? { after } : {}) }
    const page = await client.call(listDesigns, { query })
    items.push(...page.items)
    after = page.next
  } while (after)
  const rows = items.map(({ key, title, released, revisions }) => [key, released, revisions.length, title])
  await print(
    {
      json: { format: 'ogee.designs/1', items },
      lines: items,
      table: () =>
        textTable(
          [
            { head: 'Key' },
            { head: 'Released', right: true },
            { head: 'Revisions', right: true },
            { head: 'Title' },
          ],
          rows,
        ),
      csv: { heads: ['key', 'released', 'revisions', 'title'], rows },
    },
    context,
  )
  return 0
}
