import { Button } from '../../ui/button.tsx'

/** Points drawn at once: more than that nobody tells apart, and a browser draws slowly. */
export const pageSize = 400

export function pageOf<Item>(items: readonly Item[], page: number): readonly Item[] {
  return items.length <= pageSize ? items : items.slice(page * pageSize, (page + 1) * pageSize)
}

type Props = { page: number; pages: number; count: number; onPage: (page: number) => void }

/** Which points of a long lot a chart shows; nothing where it shows all. */
export function PointPages({ page, pages, count, onPage }: Props) {
  if (pages < 2) return null
  const last = Math.min(count, (page + 1) * pageSize)
  return (
    <span className="inline-flex items-center gap-2 text-small text-ink-2 print:hidden">
      <Button look="quiet" disabled={page === 0} onClick={() => onPage(page - 1)}>
        earlier
      </Button>
      {`${page * pageSize + 1} to ${last} of ${count}`}
      <Button look="quiet" disabled={page === pages - 1} onClick={() => onPage(page + 1)}>
        later
      </Button>
    </span>
  )
}
