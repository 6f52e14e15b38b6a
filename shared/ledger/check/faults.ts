/** What can be wrong with a ledger. */
export type FaultKind =
  | 'entry-missing'
  | 'entry-unreadable'
  | 'leaf-missing'
  | 'hash'
  | 'tree'
  | 'row'
  | 'row-missing'
  | 'receipt'
  | 'document'
  | 'root'
  | 'cut'
  | 'checkpoint'
  | 'key'
  | 'stray'

export type LedgerFault = {
  what: FaultKind
  /** The entry that disagrees, or the first of those among which one does; null when it is about none. */
  entry: number | null
  /** The last of them. */
  to: number | null
  record: string | null
  message: string
}

/** How many are kept; the first counts, and how many there are. */
const kept = 100

export type Faults = {
  add: (fault: LedgerFault) => void
  /** In the order of entries; what is about none comes last. */
  list: () => LedgerFault[]
  count: () => number
}

export function collectFaults(): Faults {
  const faults: LedgerFault[] = []
  let count = 0
  const inOrder = () => faults.sort((a, b) => (a.entry ?? Infinity) - (b.entry ?? Infinity) || 0)
  return {
    add: (fault) => {
      count++
      faults.push(fault)
      // Signatures are checked aside and so come late: room is made by leaving out those of the highest entries.
      if (faults.length > kept * 2) inOrder().length = kept
    },
    list: () => inOrder().slice(0, kept),
    count: () => count,
  }
}
