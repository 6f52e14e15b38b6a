import { OgeeError } from '../../shared/errors.ts'

/** A caller hears within three seconds, whatever the database does (R8). Milliseconds. */
const deadlineMs = 2_900

/**
 * The work's answer, or an outage when it takes too long. The work itself goes on: what it commits is found again by its
 * idempotency key.
 */
export async function within<T>(work: Promise<T>, ms = deadlineMs): Promise<T> {
  let timer: NodeJS.Timeout | undefined
  const late = new Promise<never>((_, reject) => {
    timer = setTimeout(() => {
      reject(
        new OgeeError(
          'database-unavailable',
          'The database has not answered in time. Try again in a moment.',
          {
            facts: { retryAfterSeconds: 1 },
          },
        ),
      )
    }, ms)
  })
  try {
    return await Promise.race([work, late])
  } finally {
    clearTimeout(timer)
    // The race is over: a failure that comes later has nobody to hear it.
    work.catch(() => undefined)
  }
}
