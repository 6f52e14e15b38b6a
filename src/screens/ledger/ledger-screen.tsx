import { useQuery } from '@tanstack/react-query'
import { LedgerFacts } from '../../features/ledger/ledger-facts.tsx'
import { checkpointOptions, ledgerKeyOptions } from '../../features/ledger/queries.ts'
import { Button } from '../../ui/button.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'

/** The newest checkpoint and the key: what somebody outside keeps, to check later that nothing was changed. */
export default function LedgerScreen() {
  const checkpoint = useQuery(checkpointOptions)
  const key = useQuery(ledgerKeyOptions)
  const error = checkpoint.error ?? key.error
  if (error && checkpoint.data === undefined) {
    return (
      <PageProblem place="Ledger" what="Checkpoint" error={error} onRetry={() => void checkpoint.refetch()} />
    )
  }
  return (
    <>
      <PageHead
        place="Ledger"
        title="Newest checkpoint"
        state={checkpoint.isFetching ? 'reading' : 'no sign-in is needed for what stands here'}
        acts={<Button onClick={() => void checkpoint.refetch()}>Read again</Button>}
      />
      {checkpoint.data === undefined ? (
        <Loading>Reading the checkpoint.</Loading>
      ) : (
        <LedgerFacts checkpoint={checkpoint.data} verifierKey={key.data ?? null} />
      )}
    </>
  )
}
