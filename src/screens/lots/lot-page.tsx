import { useQuery } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useNavigate, useSearchParams } from 'react-router-dom'
import { standing as standings } from '../../../shared/contract/lot-standing.ts'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { revisionOptions } from '../../features/design/queries.ts'
import { AttentionList, attentionRows } from '../../features/lot/attention-list.tsx'
import { SignOffSentence } from '../../features/lot/lot-sentences.tsx'
import { MissingList } from '../../features/lot/missing-list.tsx'
import { shownRange } from '../../features/lot/shown-range.ts'
import { YieldTable } from '../../features/lot/yield-table.tsx'
import { useKeys } from '../../lib/keys.ts'
import { paths } from '../../lib/paths.ts'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { useRowKeys } from '../../ui/use-row-keys.ts'
import { LotHead } from './lot-head.tsx'
import { useLotUnits } from './use-lot-units.ts'
import { useNeighbours } from './use-neighbours.ts'

const StationLine = lazy(() => import('./station-line.tsx'))
const LotDrawn = lazy(() => import('./lot-drawn.tsx'))
const UploadPanel = lazy(() => import('../../features/lot/upload/upload-panel.tsx'))

const firstFew = 8

export function LotPage({ lot }: { lot: LotDetail }) {
  const [search, setSearch] = useSearchParams()
  const navigate = useNavigate()
  const [shown, setShown] = useState(firstFew)
  const design = useQuery(revisionOptions(lot.design, lot.revision))
  const units = useLotUnits(lot)
  const rows = attentionRows(units.data?.units ?? [], standings.options)
  const keys = useRowKeys(Math.min(rows.length, shown))
  const go = useNeighbours(lot)
  const isAdding = search.has('add') && lot.state === 'open'
  const setAdding = (on: boolean) => change(on ? { add: '1' } : { add: null })
  const change = (to: Record<string, string | null>) => {
    const next = new URLSearchParams(search)
    for (const [name, value] of Object.entries(to)) {
      if (value === null || value === '') next.delete(name)
      else next.set(name, value)
    }
    setSearch(next, { replace: true })
  }
  useKeys([
    { keys: 'j', does: 'next unit needing attention', run: () => keys.move(1) },
    { keys: 'k', does: 'previous unit needing attention', run: () => keys.move(-1) },
    { keys: 'Enter', does: 'open its record', run: keys.open },
    {
      keys: 'b',
      does: 'open it on Bench',
      run: () => {
        const row = rows[keys.row]
        if (!row) return
        const { channel, range } = row.place ?? {}
        void navigate(paths.benchFor({ design: lot.design, unit: row.unit, lot: lot.key, channel, range }))
      },
    },
    { keys: 'u', does: 'add units', run: () => setAdding(true) },
    { keys: '[', does: 'earlier lot of this design', run: () => void go(1) },
    { keys: ']', does: 'later lot of this design', run: () => void go(-1) },
  ])
  const document = design.data?.document
  const hasUnits = lot.records > 0
  return (
    <div className="print-wide">
      <LotHead
        lot={lot}
        title={document?.title ?? ''}
        document={document}
        units={units.data?.units ?? []}
        onAdd={() => setAdding(true)}
      />
      {isAdding && document ? (
        <Suspense fallback={<Loading>Reading what takes files.</Loading>}>
          <UploadPanel lot={lot} design={document} onClose={() => setAdding(false)} />
        </Suspense>
      ) : null}
      <div className="mt-2">
        <SignOffSentence lot={lot} />
        {hasUnits ? (
          // Its place is kept, so that nothing jumps when it is known.
          <div className="min-h-5 print:min-h-0">
            {document && units.data ? (
              <Suspense fallback={null}>
                <StationLine
                  lot={lot}
                  range={shownRange(document, units.data.units, search.get('range')).id}
                />
              </Suspense>
            ) : null}
          </div>
        ) : null}
      </div>
      <Problem error={units.error ?? design.error} />
      {hasUnits ? (
        <div className="mt-3 grid gap-x-7 gap-y-3 wide:grid-cols-[5fr_7fr] print:grid-cols-[5fr_7fr]">
          <YieldTable counts={lot.counts} />
          <AttentionList
            lot={lot}
            rows={rows}
            row={keys.row}
            shown={shown}
            hasChannels={(document?.channels.length ?? 1) > 1}
            onMore={() => setShown(shown + 50)}
          />
        </div>
      ) : (
        <Empty>
          No units yet. {lot.state === 'open' ? 'Add a points CSV, or run: ' : null}
          {lot.state === 'open' ? (
            <code className="font-mono text-body">{`ogee batch --lot ${lot.key} points.csv`}</code>
          ) : null}
        </Empty>
      )}
      <MissingList lot={lot} />
      {hasUnits && units.isPending ? <Loading>Reading the units.</Loading> : null}
      {hasUnits && units.data && document ? (
        <Suspense fallback={<Loading>Drawing the lot.</Loading>}>
          <LotDrawn lot={lot} design={document} units={units.data.units} search={search} onSearch={change} />
        </Suspense>
      ) : null}
    </div>
  )
}
