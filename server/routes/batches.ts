import type { Response } from 'express'
import { type BatchEnd, postBatch } from '../../shared/contract/batches.ts'
import { OgeeError } from '../../shared/errors.ts'
import { type LineOutcome, recordBatch } from '../commands/record-batch.ts'
import { recordJson } from '../commands/recording/read-stored.ts'
import { linesOf, type RawLine, readLine } from '../http/batch-lines.ts'
import { within } from '../http/deadline.ts'
import { stillThere } from '../http/identify.ts'
import { localsOf } from '../http/locals.ts'
import { asKnown, problemOf } from '../http/problems.ts'
import { ReadyLines, type Serve } from '../http/serve.ts'
import { requireAccess } from '../policies/access.ts'
import type { RouteDeps } from './route-deps.ts'

export function batchRoutes(serve: Serve, deps: RouteDeps): void {
  serve(postBatch, async ({ principal, rawBody, request, response }) => {
    const lines = linesOf(rawBody as Buffer)
    await deps.throttle.countLines(principal, lines.length)
    const principalNow = async () => {
      const found = await within(stillThere(deps, request))
      if (found) requireAccess(postBatch.access, found)
      else throw principal.kind === 'token' ? tokenGone() : sessionGone()
      return found
    }
    const outcomes = recordBatch(
      { record: (asked) => within(deps.record(asked)), principalNow },
      readAll(lines),
    )
    return new ReadyLines(answersOf(outcomes, response))
  })
}

/** Lazily, so that a long block is read between its steps and holds up nobody. */
function* readAll(lines: readonly RawLine[]) {
  for (const line of lines) yield readLine(line)
}

async function* answersOf(outcomes: AsyncIterable<LineOutcome[]>, response: Response) {
  const end: BatchEnd = { end: true, lines: 0, recorded: 0, replayed: 0, refused: 0 }
  for await (const some of outcomes) {
    for (const { recorded } of some) {
      end.lines++
      end[recorded === null ? 'refused' : recorded.replayed ? 'replayed' : 'recorded']++
    }
    yield some.map((outcome) => answerOf(outcome, response))
  }
  yield [JSON.stringify(end)]
}

function answerOf(outcome: LineOutcome, response: Response): string {
  const { line, key } = outcome
  const about = `{"line":${line},"key":${JSON.stringify(key)}`
  if (outcome.recorded !== null) {
    const { record, replayed } = outcome.recorded
    return `${about},"status":201,"record":${recordJson(record, replayed)}}`
  }
  const known = asKnown(outcome.error)
  const locals = localsOf(response)
  if (known.status >= 500) {
    locals.problem = known.code
    locals.failure = outcome.error
  }
  return `${about},"status":${known.status},"problem":${JSON.stringify(problemOf(known, locals.id))}}`
}

const tokenGone = () =>
  new OgeeError('token-invalid', 'The token was revoked or expired while this was sent.')
const sessionGone = () => new OgeeError('sign-in-required', 'The session ended while this was sent. Sign in.')
