import { useQuery } from '@tanstack/react-query'
import { useSearchParams } from 'react-router-dom'
import type { StoredCheckpoint } from '../../../shared/contract/ledger-checkpoints.ts'
import { checkpointOverOptions, type Pair } from '../../features/ledger/checkpoint-queries.ts'
import type { Sizes } from '../../features/ledger/checkpoint-table.tsx'

const sizeIn = (text: string | null) => (text !== null && /^\d{1,15}$/.test(text) ? Number(text) : null)

export type Picked = {
  chosen: Sizes
  pair: Pair | null
  /** A size of the address over which nothing was signed. */
  unknown: number | null
  choose: (change: Partial<Sizes>) => void
}

/** The two checkpoints that the address names by their sizes. */
export function usePicked(): Picked {
  const [search, setSearch] = useSearchParams()
  const chosen = { from: sizeIn(search.get('from')), to: sizeIn(search.get('to')) }
  const one = useQuery(checkpointOverOptions(chosen.from)).data
  const other = useQuery(checkpointOverOptions(chosen.to)).data
  const inOrder = (chosen.from ?? 0) <= (chosen.to ?? 0)
  const [older, newer] = inOrder ? [one, other] : [other, one]
  return {
    chosen,
    // Whichever way round they were chosen, the smaller is the older.
    pair: older && newer ? { older: named(older), newer: named(newer) } : null,
    unknown: one === null ? chosen.from : other === null ? chosen.to : null,
    choose: (change) => {
      const to = new URLSearchParams(search)
      for (const [name, value] of Object.entries({ ...chosen, ...change })) {
        if (value === null) to.delete(name)
        else to.set(name, String(value))
      }
      setSearch(to, { replace: true })
    },
  }
}

const named = ({ number, note }: StoredCheckpoint) => ({ name: `Checkpoint ${number}`, note })
