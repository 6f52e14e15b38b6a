import { verdictExit } from '../../shared/contract/exit.ts'
import { errorTable, isOgeeError, type OgeeError } from '../../shared/errors.ts'
import type { Block } from '../batch/blocks.ts'
import { type Outcome, refused } from '../batch/item.ts'
import { sendBlock } from '../batch/send-block.ts'
import { isOutage } from './spool-client.ts'
import type { Spooler } from './spooler.ts'

/** What is put down when it does not go through at once need not be tried for long. */
const tries = 2

/** Sends a block; what the server does not answer for is computed here and put down, row by row, in order. */
export async function spoolBlock(spooler: Spooler, block: Block): Promise<void> {
  if (await spooler.mayGoAhead()) {
    try {
      await sendBlock(spooler.client, block, tries)
      await rememberOne(spooler, block)
      return
    } catch (error) {
      if (!isOutage(error)) throw error
      spooler.noteAway()
    }
  }
  await putAll(spooler, block)
}

/** None is said to be saved before the folder is durable, also when the disk is full half-way. */
async function putAll(spooler: Spooler, { rows }: Block): Promise<void> {
  const put: { row: Block['rows'][number]; outcome: Outcome }[] = []
  try {
    for (const row of rows) {
      if (row.outcome === null) put.push({ row, outcome: await outcomeOf(spooler, row.send) })
    }
  } finally {
    spooler.spool.sync('pending')
    for (const { row, outcome } of put) row.outcome = outcome
  }
}

async function outcomeOf(spooler: Spooler, { body, key }: Block['rows'][number]['send']): Promise<Outcome> {
  try {
    const record = await spooler.put(body, key, false)
    return { exit: record.verdict === null ? 0 : verdictExit[record.verdict], record }
  } catch (error) {
    if (!isOgeeError(error) || !isOwnFault(error)) throw error
    return refused(error)
  }
}

/** What is wrong with this unit and no other. */
const isOwnFault = ({ code }: OgeeError) => errorTable[code].exit === 65

async function rememberOne(spooler: Spooler, { rows }: Block): Promise<void> {
  for (const { outcome, send } of rows) {
    if (outcome === null || !('record' in outcome) || outcome.record.id === null) continue
    await spooler.remember(outcome.record, send.body)
    return
  }
}
