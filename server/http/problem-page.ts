import type { RequestHandler } from 'express'
import { type ErrorCode, errorTable, OgeeError } from '../../shared/errors.ts'

/** The page that a problem's `type` leads to: what the code means, for a person who follows the link. Plain text. */
export const problemPage: RequestHandler = (request, response) => {
  const code = String(request.params.code)
  if (!Object.hasOwn(errorTable, code)) throw new OgeeError('not-found', 'There is no such problem.')
  const { title, status, retry, exit } = errorTable[code as ErrorCode]
  response
    .type('text/plain; charset=utf-8')
    .send(
      [
        `${title}.`,
        '',
        `Code: ${code}`,
        `HTTP status: ${status}`,
        `Exit code of the command line: ${exit}`,
        retry
          ? 'The same request may succeed later: try again, with the same idempotency key.'
          : 'The same request will be refused again: change what the detail of the answer names.',
        '',
      ].join('\n'),
    )
}
