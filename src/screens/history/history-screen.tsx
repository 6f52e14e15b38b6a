import { useQuery } from '@tanstack/react-query'
import { useRef, useState } from 'react'
import { FilterRow } from '../../features/record/filter-row.tsx'
import { countOptions, recordsOptions } from '../../features/record/queries.ts'
import { useKeys } from '../../lib/keys.ts'
import { Button } from '../../ui/button.tsx'
import { copyText } from '../../ui/clipboard.ts'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { HistoryExport } from './history-export.tsx'
import { HistoryState } from './history-state.tsx'
import { Records } from './records.tsx'
import { useChoices } from './use-choices.ts'
import { useView, type View } from './use-view.ts'

const copyLink = () => void copyText(window.location.href, 'Copied the link to this view.')

/** Every record, newest first: the address holds the filters and the page in view. */
export default function HistoryScreen() {
  const { view, keep, change, clear, goNewest } = useView()
  const { filters } = view
  const here = useQuery(recordsOptions(filters, view.starts.at(-1)?.after ?? ''))
  const counted = useQuery(countOptions(filters))
  const choices = useChoices()
  const [exporting, setExporting] = useState(false)
  const unit = useRef<HTMLInputElement>(null)
  // The rows of the last view stay until the first ones of the next are there.
  const [shown, setShown] = useState<View | null>(null)
  if (here.data && shown?.id !== view.id) setShown(view)
  useKeys([
    { keys: '/', does: 'filter by unit', run: () => unit.current?.focus() },
    { keys: 'e', does: 'export what is filtered', run: () => setExporting(true) },
    { keys: 'c', does: 'copy the link to this view', run: copyLink },
  ])
  if (here.error && shown?.id !== view.id) {
    return (
      <PageProblem place="History" what="Records" error={here.error} onRetry={() => void here.refetch()} />
    )
  }
  return (
    <div className="print-wide">
      <PageHead
        place="History"
        title="Records"
        state={<HistoryState counted={counted.data} isReading={shown !== null && shown.id !== view.id} />}
        acts={
          <>
            <Button look="quiet" onClick={() => setExporting(true)}>
              Export
            </Button>
            <Button onClick={copyLink}>Copy link to this view</Button>
          </>
        }
      />
      <FilterRow filters={filters} choices={choices} onChange={change} onClear={clear} unitRef={unit} />
      {shown ? (
        <Records key={shown.id} view={shown} onKeep={(place) => keep(shown.id, place)} onNewest={goNewest} />
      ) : (
        <Loading>Reading the records.</Loading>
      )}
      {exporting ? (
        <HistoryExport filters={filters} counted={counted.data} onClose={() => setExporting(false)} />
      ) : null}
    </div>
  )
}
