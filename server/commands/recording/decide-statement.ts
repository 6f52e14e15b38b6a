import type { RecordBody } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Sql } from '../../db/sql.ts'
import { bodyOf, type Context, currentFrom, type Decision, lastOf } from './context.ts'
import { type Followed, followedBy, readFollowed } from './followed.ts'
import type { CurrentCodes, PlaceState } from './place.ts'

/** An override makes the codes of a suspect record the unit's current ones; the suspect record itself stays as it is. */
export function decideOverride(context: Context): Decision {
  const { body: meant, withdrawn, overridden } = meantBy(context)
  if (withdrawn) throw withdrawnBefore(meant)
  if (meant.kind !== 'trim' || meant.verdict !== 'suspect' || overridden) {
    const why = overridden ? 'was overridden before' : `is ${meant.verdict ?? meant.kind}`
    const message = `Only a suspect trim can be overridden; record ${meant.number} ${why}.`
    throw new OgeeError('override-not-suspect', message, { errors: [{ path: '/follows', message }] })
  }
  const body = statement(context, meant, { verdict: 'suspect', accepted: true })
  const current = currentFrom(meant) ?? context.state.current
  return {
    body,
    notices: [],
    state: { ...context.state, current, last: lastOf(context) },
    context,
  }
}

/** A withdrawal says that a record was made in error: it stays, and what the unit has now is worked out without it. */
export async function decideWithdrawal(sql: Sql, context: Context): Promise<Decision> {
  const { body: meant, withdrawn } = meantBy(context)
  if (withdrawn) throw withdrawnBefore(meant)
  if (meant.kind === 'withdraw') {
    const message = `Record ${meant.number} is a withdrawal, which cannot be withdrawn: measure again.`
    throw new OgeeError('follows-unknown', message, { errors: [{ path: '/follows', message }] })
  }
  const body = statement(context, meant, { verdict: null, accepted: false })
  const rest = await stateWithout(sql, context, meant.id)
  return { body, notices: [], state: { ...rest, day: context.state.day, last: lastOf(context) }, context }
}

function meantBy({ job, known, state, place }: Context): Followed {
  return followedBy(job.request.follows ?? 'last', known, state, place)
}

function statement(
  context: Context,
  meant: RecordBody,
  said: Pick<RecordBody, 'verdict' | 'accepted'>,
): RecordBody {
  return bodyOf(context, {
    ...said,
    lot: meant.lot,
    pass: meant.pass,
    follows: meant.id,
    applied: null,
    effects: null,
    points: null,
    result: null,
  })
}

function withdrawnBefore(meant: RecordBody): OgeeError {
  return new OgeeError('already-withdrawn', `Record ${meant.number} was withdrawn before.`)
}

type Line = { id: string; kind: RecordBody['kind']; follows: string | null; accepted: number; pass: number }

/** How the place stands when a record and what follows from it no longer count. */
async function stateWithout(sql: Sql, { place }: Context, gone: string): Promise<Omit<PlaceState, 'last'>> {
  const lines = await sql.rows<Line>(
    `SELECT id, kind, follows, accepted, pass FROM records WHERE unit_id = ? AND channel = ? AND range_id = ?
      ORDER BY recorded_at DESC, id DESC`,
    [place.unitId, place.channel, place.range],
  )
  const withdrawn = new Set([
    gone,
    ...lines.flatMap((line) => (line.kind === 'withdraw' ? (line.follows ?? []) : [])),
  ])
  const counting = lines.filter((line) => !withdrawn.has(line.id))
  const measurement = counting.find((line) => line.kind === 'trim' || line.kind === 'verify')
  const source = counting.find(
    (line) =>
      (line.kind === 'trim' && line.accepted) ||
      (line.kind === 'override' && line.follows !== null && !withdrawn.has(line.follows)),
  )
  const sourceId = source?.kind === 'override' ? source.follows : (source?.id ?? null)
  return {
    current: await currentOf(sql, sourceId),
    measurement: measurement?.id ?? null,
    pass: measurement?.pass ?? 0,
  }
}

async function currentOf(sql: Sql, id: string | null): Promise<CurrentCodes | null> {
  if (id === null) return null
  const found = (await readFollowed(sql, [id])).get(id)
  return found ? currentFrom(found.body) : null
}
