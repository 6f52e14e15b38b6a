import { useQuery } from '@tanstack/react-query'
import { useEffect, useRef, useState } from 'react'
import { useSearchParams } from 'react-router-dom'
import { FilterRow } from '../../features/record/filter-row.tsx'
import { readFilters, withFilters } from '../../features/record/filters.ts'
import { countOptions, recordsOptions } from '../../features/record/queries.ts'
import { RecordList, RecordTable } from '../../features/record/record-table.tsx'
import { useKeys } from '../../lib/keys.ts'
import { Button } from '../../ui/button.tsx'
import { copyText } from '../../ui/clipboard.ts'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Problem } from '../../ui/problem.tsx'
import { useMedia } from '../../ui/use-media.ts'
import { useRowKeys } from '../../ui/use-row-keys.ts'
import { HistoryExport } from './history-export.tsx'
import { HistoryFoot } from './history-foot.tsx'
import { HistoryState } from './history-state.tsx'
import { NoRecords } from './no-records.tsx'
import { useChoices } from './use-choices.ts'
import { usePages } from './use-pages.ts'

const copyLink = () => void copyText(window.location.href, 'Copied the link to this view.')

/** Every record, newest first, in keyset pages: the address holds the filters and where the page starts. */
export default function HistoryScreen() {
  const [search, setSearch] = useSearchParams()
  const filters = readFilters(search)
  const after = search.get('after') ?? undefined
  const records = useQuery(recordsOptions(filters, after))
  const counted = useQuery(countOptions(filters))
  const choices = useChoices()
  const [exporting, setExporting] = useState(false)
  const wide = useMedia('(min-width: 48rem)', true)
  const unit = useRef<HTMLInputElement>(null)
  const items = records.data?.items ?? []
  const pages = usePages(records.isPlaceholderData ? null : (records.data?.next ?? null))
  const rows = useRowKeys(items.length)
  const { reset } = rows
  // biome-ignore lint/correctness/useExhaustiveDependencies: another page starts at its first row
  useEffect(reset, [search])
  useKeys([
    { keys: '/', does: 'filter by unit', run: () => unit.current?.focus() },
    { keys: 'j', does: 'next record', run: () => rows.move(1) },
    { keys: 'k', does: 'previous record', run: () => rows.move(-1) },
    { keys: 'Enter', does: 'open the record', run: rows.open },
    { keys: ']', does: 'older records', run: pages.older },
    { keys: '[', does: 'newer records', run: pages.newer },
    { keys: 'e', does: 'export what is filtered', run: () => setExporting(true) },
    { keys: 'c', does: 'copy the link to this view', run: copyLink },
  ])
  if (records.error && !records.data) {
    return (
      <PageProblem
        place="History"
        what="Records"
        error={records.error}
        onRetry={() => void records.refetch()}
      />
    )
  }
  const List = wide ? RecordTable : RecordList
  return (
    <>
      <PageHead
        place="History"
        title="Records"
        state={
          <HistoryState counted={counted.data} isReading={records.isFetching && records.data !== undefined} />
        }
        acts={
          <>
            <Button look="quiet" onClick={() => setExporting(true)}>
              Export
            </Button>
            <Button onClick={copyLink}>Copy link to this view</Button>
          </>
        }
      />
      <FilterRow
        filters={filters}
        choices={choices}
        onChange={(change) => setSearch(withFilters(search, change))}
        onClear={() => setSearch(new URLSearchParams())}
        unitRef={unit}
      />
      {records.error ? <Problem error={records.error} /> : null}
      {records.isPending ? <Loading>Reading the records.</Loading> : null}
      {records.data && items.length === 0 ? (
        <NoRecords filters={filters} older={after !== undefined} />
      ) : null}
      {items.length > 0 ? <List records={items} row={rows.row} /> : null}
      <HistoryFoot records={items} pages={pages} />
      {exporting ? (
        <HistoryExport filters={filters} counted={counted.data} onClose={() => setExporting(false)} />
      ) : null}
    </>
  )
}
