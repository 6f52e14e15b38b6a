import type { BatchOutcome } from '../../shared/contract/batches.ts'
import { verdictExit } from '../../shared/contract/exit.ts'
import { type ErrorCode, errorTable, OgeeError } from '../../shared/errors.ts'
import type { Client } from '../client.ts'
import type { Block } from './blocks.ts'
import type { Outcome, Problem } from './item.ts'

const usualTries = 8
const firstWaitMs = 250
const longestWaitMs = 5_000

/**
 * Sends a block and gives every row of it an outcome; lines that the server could not see to just now are sent again.
 * @throws the trouble that would not go away; rows without an outcome are then not known to be recorded
 */
export async function sendBlock(
  client: Pick<Client, 'sendBlock'>,
  block: Block,
  tries = usualTries,
): Promise<void> {
  for (let attempt = 1; ; attempt += 1) {
    const open = block.rows.filter(({ outcome }) => outcome === null)
    if (open.length === 0) return
    const answers = await client.sendBlock(open.map(({ send }) => `${send.text}\n`).join(''))
    let trouble: OgeeError | undefined
    for (const answer of answers) {
      const row = open[answer.line - 1]
      if (!row) throw new OgeeError('defect', 'The server answered a line that was not sent.')
      const wrong = troubleIn(answer)
      if (wrong === undefined) row.outcome = outcomeOf(answer)
      trouble ??= wrong
    }
    if (trouble === undefined) {
      if (answers.length === open.length) return
      throw new OgeeError('defect', 'The server did not answer every line of a block.')
    }
    if (!errorTable[trouble.code].retry || attempt >= tries) throw trouble
    const waitMs = Math.min(longestWaitMs, firstWaitMs * 2 ** (attempt - 1))
    await new Promise((resolve) => setTimeout(resolve, waitMs * (0.75 + Math.random() / 2)))
  }
}

/** What says nothing about the measurement: the server cannot just now, or the token may no longer. */
function troubleIn(answer: BatchOutcome): OgeeError | undefined {
  if (!('problem' in answer)) return undefined
  const { code, detail, facts = {} } = answer.problem
  const known = (errorTable as Record<string, { retry: boolean } | undefined>)[code]
  const isTrouble = known ? known.retry : answer.status === 429 || answer.status === 503
  if (!isTrouble && answer.status !== 401) return undefined
  return new OgeeError(known ? code : 'not-ready', detail, { facts })
}

function outcomeOf(answer: BatchOutcome): Outcome {
  if ('record' in answer) {
    const { verdict } = answer.record
    return { exit: verdict === null ? 0 : verdictExit[verdict], record: answer.record }
  }
  const exit = exitOf(answer.problem.code, answer.status)
  return { exit, problem: { ...answer.problem, exit } as Problem }
}

/** A newer server may have codes that are not known here. */
function exitOf(code: string, status: number): number {
  if (code in errorTable) return errorTable[code as ErrorCode].exit
  return status === 403 ? 77 : status >= 500 ? 70 : 65
}
