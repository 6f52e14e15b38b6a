import { OgeeError } from '../../shared/errors.ts'
import { etagOf, type RevisionRow, type RevisionState, writersOf } from '../models/design.ts'

/** What may be done to a revision, as it stands. RFC 9110, 13.2.1: a refusal of its own comes before a precondition. */

const stateWords: Readonly<Record<RevisionState, string>> = {
  draft: 'a draft',
  'in-review': 'in review',
  released: 'released',
  withdrawn: 'withdrawn',
}

/** Refuses with the current state, and who brought it there and when, so that the loser of a race knows. */
export function requireState(row: RevisionRow, wanted: RevisionState, to: string): void {
  if (row.state === wanted) return
  const { verb, by, at } = lastAct(row)
  throw new OgeeError(
    'revision-state',
    `Revision ${row.number} is ${stateWords[row.state]}: ${by} ${verb} it at ${at}. Only one that is ${stateWords[wanted]} can be ${to}.`,
    { facts: { state: row.state, by, at, etag: etagOf(row) } },
  )
}

/** `If-Match` by RFC 9110, 13.1.1: a list of etags or `*`; weak ones never match. */
export function requireMatch(row: RevisionRow, ifMatch: string | null): void {
  const etag = etagOf(row)
  if (ifMatch === null || ifMatch.trim() === '*') return
  if (ifMatch.split(',').some((one) => one.trim() === etag)) return
  const { verb, by, at } = lastAct(row)
  throw new OgeeError(
    'precondition-failed',
    `${by} ${verb} revision ${row.number} at ${at}, after you opened it. Look at the differences, then save again or keep yours as a new draft.`,
    { facts: { state: row.state, by, at, etag } },
  )
}

/** True when that person wrote any of it; throws unless the site lets an author release. */
export function releasesOwn(row: RevisionRow, personId: string, authorMayRelease: boolean): boolean {
  const own = writersOf(row).some(({ kind, id }) => kind === 'person' && id === personId)
  if (!own || authorMayRelease) return own
  throw new OgeeError(
    'author-cannot-release',
    `You wrote revision ${row.number}, so someone else releases it. Ask another engineer.`,
    { facts: { author: row.author } },
  )
}

type Act = { verb: string; by: string; at: string }

/** What brought the revision to how it stands. */
function lastAct(row: RevisionRow): Act {
  const saved = { verb: 'saved', by: row.savedBy ?? row.author, at: row.savedAt ?? row.createdAt }
  const known = (verb: string, by: string | null, at: Date | null) =>
    by === null || at === null ? saved : { verb, by, at }
  const returned = known('returned', row.returnedBy, row.returnedAt)
  const acts = {
    draft: returned.at >= saved.at ? returned : saved,
    'in-review': known('submitted', row.submittedBy, row.submittedAt),
    released: known('released', row.releasedBy, row.releasedAt),
    withdrawn: known('withdrew', row.withdrawnBy, row.withdrawnAt),
  }
  const { verb, by, at } = acts[row.state]
  return { verb, by, at: `${at.toISOString().slice(0, 19)}Z` }
}
