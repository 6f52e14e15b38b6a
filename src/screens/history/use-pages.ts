import { useLocation, useSearchParams } from 'react-router-dom'

export type Pages = { older: () => void; newer: () => void; hasOlder: boolean; hasNewer: boolean }

/**
 * Keyset pages only know what comes after. The way back is kept beside the address, in the history entry; where it is
 * missing (an opened link), newer goes to the newest page.
 */
export function usePages(next: string | null): Pages {
  const [search, setSearch] = useSearchParams()
  const location = useLocation()
  const trail = trailOf(location.state)
  const here = search.get('after')

  const go = (after: string | null, way: string[]) => {
    const to = new URLSearchParams(search)
    if (after === null || after === '') to.delete('after')
    else to.set('after', after)
    setSearch(to, { state: { trail: way } })
  }
  return {
    hasOlder: next !== null,
    hasNewer: here !== null,
    older: () => {
      if (next !== null) go(next, [...trail, here ?? ''])
    },
    newer: () => {
      if (here !== null) go(trail.at(-1) ?? null, trail.slice(0, -1))
    },
  }
}

function trailOf(state: unknown): string[] {
  const trail = (state as { trail?: unknown } | null)?.trail
  return Array.isArray(trail) ? trail.filter((cursor) => typeof cursor === 'string') : []
}
