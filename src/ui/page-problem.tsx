import { isOgeeError } from '../../shared/errors.ts'
import { Button } from './button.tsx'
import { Empty } from './empty.tsx'
import { PageHead } from './page-head.tsx'
import { Problem } from './problem.tsx'

/**
 * What stands in the place of a page that could not be read. A forbidden one says whom to ask: the answer may name the
 * administrators (fact `administrators`).
 */
export function PageProblem({
  place,
  what,
  error,
  onRetry,
}: {
  place: string
  /** As a sentence starts: "Design DBS-A". */
  what: string
  error: unknown
  onRetry?: () => void
}) {
  if (isOgeeError(error, 'forbidden') || isOgeeError(error, 'insufficient-scope')) {
    const names = error.facts.administrators
    return <Forbidden place={place} what={what} {...(typeof names === 'string' ? { ask: names } : {})} />
  }
  if (isOgeeError(error, 'not-found')) {
    return (
      <>
        <PageHead place={place} title={what} />
        <Empty>There is nothing here, or it is not open to you.</Empty>
      </>
    )
  }
  if (isOgeeError(error, 'sign-in-required')) {
    // The dialog of the ended session stands over it.
    return (
      <>
        <PageHead place={place} title={what} />
        <Empty>This is read as soon as you have signed in.</Empty>
      </>
    )
  }
  if (isOgeeError(error, 'server-unreachable') || isOgeeError(error, 'database-unavailable')) {
    // The banner says what is wrong, counts down, and reads this again.
    return (
      <>
        <PageHead place={place} title={what} />
        <Empty>This is read as soon as the server answers.</Empty>
      </>
    )
  }
  return (
    <>
      <PageHead place={place} title={what} />
      <div className="mt-3 space-y-3">
        <Problem error={error} />
        {onRetry ? <Button onClick={onRetry}>Try again</Button> : null}
      </div>
    </>
  )
}

/** Says what is shut, for whom, and whom to ask. */
export function Forbidden({
  place,
  what,
  role,
  needs,
  ask,
}: {
  place: string
  what: string
  role?: string
  /** The role that opens it. */
  needs?: string
  /** Names of the administrators, when the server gives them. */
  ask?: string
}) {
  return (
    <>
      <PageHead place={place} title={`${what}: not open to you`} />
      <Empty>
        {role ? `The role ${role} does not open this page. ` : 'Your role does not open this page. '}
        {needs ? `An administrator can give you the role ${needs}` : 'An administrator can change your role'}
        {ask ? `: ${ask}.` : '.'}
      </Empty>
    </>
  )
}
