import { useLocation, useSearchParams } from 'react-router-dom'
import { type Filters, readFilters, withFilters } from '../../features/record/filters.ts'
import type { PageStart } from '../../features/record/page-chain.ts'

/** What the address and its history entry ask for. `id` stays the same while one list is scrolled. */
export type View = {
  id: string
  filters: Filters
  /** The page in view last, and those walked before it. */
  starts: readonly PageStart[]
  /** The row at the top. */
  top: number
}

export type Place = Pick<View, 'starts' | 'top'>

/**
 * The address holds the filters and the cursor of the page in view. The way to it is kept beside the address, in the history
 * entry, so that a reload and the way back find the very row; an opened link starts at its page.
 */
export function useView(): {
  view: View
  /** Replaces the place in the address: scrolling adds nothing to the way back. */
  keep: (id: string, place: Place) => void
  change: (filters: Filters) => void
  clear: () => void
  goNewest: () => void
} {
  const [search, setSearch] = useSearchParams()
  const location = useLocation()
  const after = search.get('after') ?? ''
  const kept = keptOf(location.state, after)
  return {
    view: {
      id: kept?.list ?? location.key,
      filters: readFilters(search),
      starts: kept?.starts ?? [{ after, first: 0 }],
      top: kept?.top ?? 0,
    },
    keep: (list, place) => {
      const here = place.starts.at(-1)?.after ?? ''
      const to = withFilters(search, {})
      if (here !== '') to.set('after', here)
      setSearch(to, { replace: true, state: { list, ...place } })
    },
    change: (filters) => setSearch(withFilters(search, filters)),
    clear: () => setSearch(new URLSearchParams()),
    goNewest: () => setSearch(withFilters(search, {})),
  }
}

type Kept = Place & { list: string }

/** Only what this page has put there, and for the page that the address names. */
function keptOf(state: unknown, after: string): Kept | null {
  const kept = state as Partial<Kept> | null
  if (typeof kept?.list !== 'string' || typeof kept.top !== 'number' || !Array.isArray(kept.starts))
    return null
  return kept.starts.at(-1)?.after === after ? (kept as Kept) : null
}
