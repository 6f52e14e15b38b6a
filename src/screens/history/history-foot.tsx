import type { RecordLine } from '../../../shared/contract/record.ts'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Whole } from '../../ui/number-text.tsx'
import type { Pages } from './use-pages.ts'

/** Neither page numbers nor a total, so that each page is equally quick. */
export function HistoryFoot({ records, pages }: { records: readonly RecordLine[]; pages: Pages }) {
  const first = records[0]
  const last = records.at(-1)
  return (
    <nav aria-label="Pages" className="mt-3 flex flex-wrap items-center gap-3 text-ink-2">
      {first && last ? (
        <span>
          {'records '}
          <Whole value={first.number} />
          {' to '}
          <Whole value={last.number} />
        </span>
      ) : null}
      {pages.hasNewer ? (
        <Button onClick={pages.newer}>
          Newer <KeyHint keys="[" />
        </Button>
      ) : null}
      {pages.hasOlder ? (
        <Button onClick={pages.older}>
          Older <KeyHint keys="]" />
        </Button>
      ) : null}
    </nav>
  )
}
