import { isOgeeError } from '../../shared/errors.ts'
import { asOutage } from '../db/failure.ts'
import type { Principal } from '../http/principal.ts'
import { share } from './coalesce.ts'
import type { Asked, Recorded, RecordOne } from './recorder.ts'
import { weightOf } from './recording/job.ts'

/** A line with what it asks for, or with the reason why it cannot be read. */
export type BatchLine = { line: number; key: string | null } & (
  | { asked: Omit<Asked, 'principal'> }
  | { asked: null; error: unknown }
)
export type LineOutcome = { line: number; key: string | null } & (
  | { recorded: Recorded }
  | { recorded: null; error: unknown }
)

type Deps = {
  record: RecordOne
  /** Who is asking, asked again before each step; throws once they may no longer. */
  principalNow: () => Promise<Principal>
}

/** Lines that go to the recorder together: two blocks fill a transaction, and others get their turn between two steps. */
const stepMax = share.requests / 2

/**
 * Records the lines of a block in their order and tells what became of each, some at a time.
 * Guarantee: each line is recorded whole or not at all, once for its key, as if it had been sent alone; a refused one takes
 * no other with it. After an outage, or once the caller may no longer, the rest is not tried and hears why.
 */
export async function* recordBatch(
  { record, principalNow }: Deps,
  lines: Iterable<BatchLine>,
): AsyncGenerator<LineOutcome[]> {
  let obstacle: { error: unknown } | null = null
  for (const step of stepsOf(lines)) {
    if (obstacle === null) {
      const outcomes: LineOutcome[] = await recordStep(record, principalNow, step)
      obstacle = outcomes.map(obstacleOf).find((found) => found !== null) ?? null
      yield outcomes
    } else {
      const { error } = obstacle
      yield step.map(({ line, key }) => ({ line, key, recorded: null, error }))
    }
  }
}

async function recordStep(
  record: RecordOne,
  principalNow: () => Promise<Principal>,
  step: readonly BatchLine[],
): Promise<LineOutcome[]> {
  const principal = await principalNow().then(
    (found) => ({ found }),
    (error: unknown) => ({ found: null, error }),
  )
  const startedByUnit = new Map<string, { one: BatchLine; outcome: Promise<LineOutcome> }[]>()
  const outcomes = step.map((one) => {
    const unit = one.asked === null ? '' : `${one.asked.request.design} ${one.asked.request.unit}`
    const earlier = startedByUnit.get(unit) ?? []
    const before = earlier.filter((other) => maySharePlace(other.one, one)).map(({ outcome }) => outcome)
    const outcome = recordLine(record, principal, one, before)
    startedByUnit.set(unit, [...earlier, { one, outcome }])
    return outcome
  })
  return await Promise.all(outcomes)
}

/** Records a line once those before it at its place are done with: two transactions may end in either order. */
async function recordLine(
  record: RecordOne,
  principal: { found: Principal } | { found: null; error: unknown },
  one: BatchLine,
  before: readonly Promise<LineOutcome>[],
): Promise<LineOutcome> {
  const { line, key } = one
  const obstacle = (await Promise.all(before)).map(obstacleOf).find((found) => found !== null)
  if (obstacle) return { line, key, recorded: null, error: obstacle.error }
  if (principal.found === null) return { line, key, recorded: null, error: principal.error }
  if (one.asked === null) return { line, key, recorded: null, error: one.error }
  try {
    return { line, key, recorded: await record({ ...one.asked, principal: principal.found }) }
  } catch (error) {
    return { line, key, recorded: null, error }
  }
}

/** A channel or range that is not named may be any. */
function maySharePlace({ asked: a }: BatchLine, { asked: b }: BatchLine): boolean {
  if (a === null || b === null) return false
  const may = (x: string | undefined, y: string | undefined) => x === undefined || y === undefined || x === y
  return (
    a.request.design === b.request.design &&
    a.request.unit === b.request.unit &&
    may(a.request.channel, b.request.channel) &&
    may(a.request.range, b.request.range)
  )
}

/** What would befall the rest as well. */
function obstacleOf(outcome: LineOutcome): { error: unknown } | null {
  if (outcome.recorded !== null) return null
  const error = asOutage(outcome.error)
  const isForAll = (['database-unavailable', 'token-invalid', 'sign-in-required'] as const).some((code) =>
    isOgeeError(error, code),
  )
  return isForAll ? { error } : null
}

/**
 * Cuts lines into steps. Within a step places are under way at once, so a key that comes again waits for the next one, and
 * what is said about a record (which may be of a line just before) stands alone.
 */
function* stepsOf(lines: Iterable<BatchLine>): Generator<BatchLine[]> {
  let step: BatchLine[] = []
  let weight = 0
  let keys = new Set<string>()
  for (const line of lines) {
    const alone = isStatement(line)
    const more = line.asked === null ? 0 : weightOf(line.asked.request)
    const isFull = step.length >= stepMax || weight + more > share.weight
    if (isFull || alone || (line.key !== null && keys.has(line.key))) {
      if (step.length > 0) yield step
      step = []
      weight = 0
      keys = new Set()
    }
    weight += more
    step.push(line)
    if (line.key !== null) keys.add(line.key)
    if (alone) {
      yield step
      step = []
    }
  }
  if (step.length > 0) yield step
}

function isStatement({ asked }: BatchLine): boolean {
  return asked !== null && (asked.request.kind === 'override' || asked.request.kind === 'withdraw')
}
