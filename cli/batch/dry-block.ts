import { verdictExit } from '../../shared/contract/exit.ts'
import { errorTable, OgeeError } from '../../shared/errors.ts'
import type { Client } from '../client.ts'
import { dryRun } from '../dry-run.ts'
import type { Block } from './blocks.ts'
import { refused } from './item.ts'

/** What recording a block would give. A unit that stands in it twice is looked at as the server has it, both times. */
export async function dryBlock(client: Pick<Client, 'call'>, block: Block): Promise<void> {
  for (const row of block.rows) {
    try {
      const record = await dryRun(client, row.send.body)
      row.outcome = { exit: record.verdict === null ? 0 : verdictExit[record.verdict], record }
    } catch (error) {
      if (!(error instanceof OgeeError) || isTrouble(error)) throw error
      row.outcome = refused(error)
    }
  }
}

/** What would befall every other unit as well. */
const isTrouble = ({ code, status }: OgeeError) => errorTable[code].retry || status === 401 || status >= 500
