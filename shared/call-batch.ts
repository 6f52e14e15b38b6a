import { type Caller, callLines } from './call.ts'
import { type BatchAnswer, type BatchEnd, type BatchOutcome, postBatch } from './contract/batches.ts'
import { OgeeError } from './errors.ts'

/**
 * Posts a block (`POST /trims` bodies with their keys, one a line) and gives the outcome of each line as it comes.
 * An answer without its end was cut: send the block again, nothing is doubled.
 * @returns the end, which counts the outcomes
 * @throws answer-cut when the end did not come; whatever the server refused the whole block for
 */
export async function* callBatch(caller: Caller, block: string): AsyncGenerator<BatchOutcome, BatchEnd> {
  for await (const line of callLines(caller, postBatch, block)) {
    const answer = read(line)
    if ('end' in answer) return answer
    yield answer
  }
  throw new OgeeError('answer-cut', 'The answer of the server was cut.')
}

/** Looks at what decides; whole records are not checked again here, for there are thousands a second of them. */
function read(line: string): BatchAnswer {
  const answer = JSON.parse(line) as Partial<BatchOutcome> | BatchEnd
  if ('end' in answer && answer.end) return answer
  const { line: number, status } = answer as Partial<BatchOutcome>
  if (Number.isInteger(number) && Number.isInteger(status) && ('record' in answer || 'problem' in answer))
    return answer as BatchOutcome
  throw new OgeeError('defect', 'A line of the answer of POST /batches is not as agreed.')
}
