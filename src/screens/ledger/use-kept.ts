import { useState } from 'react'
import { forget, type Kept, keep, readKept } from '../../features/ledger/kept.ts'

export type KeptHere = {
  value: Kept | null
  keep: (key: string, note: string) => void
  forget: () => void
}

/** What this browser keeps of the ledger, and how to keep or forget it. */
export function useKept(): KeptHere {
  const [value, setValue] = useState(readKept)
  return {
    value,
    keep: (key, note) => setValue(keep(key, note, new Date())),
    forget: () => {
      forget()
      setValue(null)
    },
  }
}
