import { type Standing, standing as standings } from '../../../shared/contract/lot-standing.ts'
import type { Kind } from '../../../shared/contract/record.ts'

/** What of a record says how a channel and range stands. */
export type Judged = {
  id: string
  kind: Kind
  follows: string | null
  pass: number
  verdict: string | null
}

export type PlaceStanding<Row extends Judged> = {
  standing: Standing
  pass: number
  found: Row | null
  codes: Row | null
  left: Row | null
  attention: Row | null
}

const rank = (standing: Standing) => standings.options.indexOf(standing)
export const worse = (a: Standing, b: Standing): Standing => (rank(a) <= rank(b) ? a : b)

/**
 * How a channel and range of a unit stands by its records in a lot, oldest first; null when none counts. Withdrawn
 * records count for nothing, and an overridden suspect one as accepted, unless the override was withdrawn.
 */
export function standingOf<Row extends Judged>(rows: readonly Row[]): PlaceStanding<Row> | null {
  const withdrawn = followedBy(rows, 'withdraw')
  const overridden = followedBy(
    rows.filter(({ id }) => !withdrawn.has(id)),
    'override',
  )
  const counting = rows.filter(({ id, kind }) => (kind === 'trim' || kind === 'verify') && !withdrawn.has(id))
  if (counting.length === 0) return null
  const trims = counting.filter(({ kind }) => kind === 'trim')
  const last = trims.at(-1)
  const newest = counting.at(-1)
  const left = newest?.kind === 'verify' ? newest : null
  const byTrim = last === undefined ? 'incomplete' : trimStanding(last, overridden)
  const byLeft = left === null ? byTrim : verifyStanding(left, byTrim)
  const standing = worse(byTrim, byLeft)
  const isUsable = (row: Row) => row.verdict !== 'suspect' || overridden.has(row.id)
  return {
    standing,
    pass: last?.pass ?? 0,
    found: trims.find(isUsable) ?? trims[0] ?? null,
    codes: trims.findLast((row) => isUsable(row) && row.verdict !== 'out-of-reach') ?? null,
    left,
    attention: isGood(standing) ? null : standing === byTrim ? (last ?? left) : left,
  }
}

const isGood = (standing: Standing) => rank(standing) >= rank('overridden')

function followedBy(rows: readonly Judged[], kind: Kind): Set<string> {
  return new Set(rows.flatMap((row) => (row.kind === kind ? (row.follows ?? []) : [])))
}

function trimStanding({ id, verdict, pass }: Judged, overridden: ReadonlySet<string>): Standing {
  if (verdict === 'out-of-reach' || verdict === 'too-coarse') return verdict
  if (verdict === 'suspect') return overridden.has(id) ? 'overridden' : 'suspect'
  return pass <= 1 ? 'ok-first' : 'ok-later'
}

function verifyStanding({ verdict }: Judged, otherwise: Standing): Standing {
  return verdict === 'fail' || verdict === 'conditional-fail' || verdict === 'conditional-pass'
    ? verdict
    : otherwise
}
