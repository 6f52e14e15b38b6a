import { consistencyParts } from '../../../shared/ledger/proof.ts'

/** What one hash of a consistency proof is of: entries from `first` to `last`. */
export type ProofRow = { hash: string; first: number; last: number; where: 'older' | 'newer' }

/** The hashes of a proof with the entries that each covers, in the order of entries. */
export function proofRows(from: number, to: number, path: readonly string[]): ProofRow[] {
  if (from < 1 || from > to) return []
  return consistencyParts(from, to)
    .flatMap((part, i): ProofRow[] => {
      const [start, end] = [part[0], part.at(-1)]
      const hash = path[i]
      if (!start || !end || hash === undefined) return []
      const first = start.index * 2 ** start.level
      const last = (end.index + 1) * 2 ** end.level - 1
      return [{ hash, first, last, where: last < from ? 'older' : 'newer' }]
    })
    .sort((a, b) => a.first - b.first)
}
