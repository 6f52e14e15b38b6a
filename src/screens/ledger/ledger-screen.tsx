import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { ChangeKeyDialog } from '../../features/ledger/change-key.tsx'
import { CheckPanel } from '../../features/ledger/check-panel.tsx'
import { everyNote, ledgerKeysOptions } from '../../features/ledger/checkpoint-queries.ts'
import { LedgerFacts } from '../../features/ledger/ledger-facts.tsx'
import { checkpointOptions, ledgerKeyOptions } from '../../features/ledger/queries.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { Button } from '../../ui/button.tsx'
import { download } from '../../ui/download.ts'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Checkpoints } from './checkpoints.tsx'
import { KeptHere } from './kept-here.tsx'
import { useKept } from './use-kept.ts'

/** Checkpoints, what lies between any two, the whole checked here, and the key: what somebody outside keeps. */
export default function LedgerScreen() {
  const checkpoint = useQuery(checkpointOptions)
  const key = useQuery(ledgerKeyOptions)
  const keys = useQuery(ledgerKeysOptions)
  const person = usePerson()
  const kept = useKept()
  const [isChanging, setChanging] = useState(false)
  const files = useDownload()
  const error = checkpoint.error ?? key.error ?? keys.error
  if (error && checkpoint.data === undefined) {
    return (
      <PageProblem place="Ledger" what="Checkpoint" error={error} onRetry={() => void checkpoint.refetch()} />
    )
  }
  const note = checkpoint.data
  const verifierKey = key.data ?? null
  const changes = keys.data?.flatMap(({ statement }) => statement ?? []) ?? null
  return (
    <>
      <PageHead
        place="Ledger"
        title="Newest checkpoint"
        state={checkpoint.isFetching ? 'reading' : 'no sign-in is needed for this checkpoint and the key'}
        acts={
          <>
            {person.role === 'administrator' ? (
              <Button look="quiet" onClick={() => setChanging(true)}>
                Change key
              </Button>
            ) : null}
            <Button look="quiet" disabled={files.isBusy} onClick={() => void files.all()}>
              Download all checkpoints
            </Button>
            <Button onClick={() => void checkpoint.refetch()}>Read again</Button>
          </>
        }
      />
      {files.error ? <Problem error={files.error} /> : null}
      {note === undefined ? (
        <Loading>Reading the checkpoint.</Loading>
      ) : (
        <>
          <LedgerFacts checkpoint={note} verifierKey={verifierKey} />
          <div className="mt-3.5 grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
            <KeptHere kept={kept} note={note} verifierKey={verifierKey} changes={changes} />
            {person.role === 'operator' ? null : <CheckPanel kept={kept.value} verifierKey={verifierKey} />}
          </div>
          <Checkpoints verifierKey={kept.value?.key ?? verifierKey} changes={changes} />
        </>
      )}
      {isChanging ? <ChangeKeyDialog onClose={() => setChanging(false)} /> : null}
    </>
  )
}

/** Every checkpoint as one file, read page by page. */
function useDownload() {
  const [isBusy, setBusy] = useState(false)
  const [error, setError] = useState<unknown>(null)
  const all = async () => {
    setBusy(true)
    setError(null)
    try {
      download('ledger-checkpoints.txt', await everyNote(new AbortController().signal), 'text/plain')
    } catch (failure) {
      setError(failure)
    } finally {
      setBusy(false)
    }
  }
  return { isBusy, error, all }
}
