/** Where a keyset page starts: the cursor that asks for it ('' is the newest page), and its first row in the list. */
export type PageStart = { after: string; first: number }

/** The pages walked so far, in order; `end` is the number of rows once the last page is known to be the last. */
export type Chain = { starts: readonly PageStart[]; end: number | null }

type Page = { items: readonly unknown[]; next: string | null }

export const chainFrom = (starts: readonly PageStart[]): Chain => ({ starts, end: null })

/** Rows that are known to exist. */
export const rowsOf = ({ starts, end }: Chain): number => end ?? starts.at(-1)?.first ?? 0

/** Which page holds a row. */
export function pageAt({ starts }: Chain, row: number): number {
  let low = 0
  let high = starts.length - 1
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (starts[middle]!.first <= row) low = middle
    else high = middle - 1
  }
  return low
}

/**
 * The chain once a page has been read. A page that now leads elsewhere (newer records pushed its last rows out) ends what
 * was known after it: a list must never have a hole or a row twice.
 */
export function follow(chain: Chain, index: number, { items, next }: Page): Chain {
  const start = chain.starts[index]
  if (!start) return chain
  const end = start.first + items.length
  const known = chain.starts[index + 1]
  if (next === null) {
    return known === undefined && chain.end === end
      ? chain
      : { starts: chain.starts.slice(0, index + 1), end }
  }
  if (known?.after === next && known.first === end) return chain
  return { starts: [...chain.starts.slice(0, index + 1), { after: next, first: end }], end: null }
}
