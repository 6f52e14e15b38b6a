import { useQuery } from '@tanstack/react-query'
import { readCheckpoint } from '../../features/ledger/note.ts'
import { checkpointOptions } from '../../features/ledger/queries.ts'
import { type Counted, matchWords, spaced } from '../../features/record/count-words.ts'

/** What is known of the whole beside the page: entries of the ledger, how many match, the order. */
export function HistoryState({ counted, isReading }: { counted: Counted | undefined; isReading: boolean }) {
  const checkpoint = useQuery({ ...checkpointOptions, staleTime: 30_000 })
  const head = checkpoint.data === undefined ? null : readCheckpoint(checkpoint.data)
  const parts = [
    head ? `${spaced(head.size)} in the ledger` : '',
    counted ? matchWords(counted) : '',
    isReading ? 'reading' : 'newest first',
  ]
  return <>{parts.filter((part) => part !== '').join(' · ')}</>
}
