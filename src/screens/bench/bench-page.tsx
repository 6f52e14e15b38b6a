import { lazy, Suspense, useEffect, useRef, useState } from 'react'
import type { PointGroup } from '../../../shared/points/group.ts'
import type { PointsCsv } from '../../../shared/points/parse-csv.ts'
import { voltDecimals } from '../../features/bench/build-views.ts'
import { loadPaste, loadPointsFile } from '../../features/bench/on-demand.ts'
import { ChooseMeasurement, FileTrouble, IdealDialog } from '../../features/bench/panels.tsx'
import { useLatest } from '../../features/bench/use-latest.ts'
import { dropHandlers, useLoosePaste } from '../../features/bench/use-loose-paste.ts'
import { UnmeasuredPlots } from '../../features/plot/unmeasured-plots.tsx'
import { BenchFields } from './bench-fields.tsx'
import { BenchHead } from './bench-head.tsx'
import { BenchNotices } from './bench-notices.tsx'
import type { BenchPageProps, Incoming } from './bench-props.ts'
import { plotRange } from './plot-props.ts'
import { StepCodes } from './step-codes.tsx'
import { StepFound } from './step-found.tsx'
import { StepNext } from './step-next.tsx'
import { useBenchActs } from './use-bench-acts.ts'
import { useBenchPage } from './use-bench-page.ts'

/** Plots and their scales come with the first line, and stay out of the first load. */
const BenchPlots = lazy(() => import('./bench-plots.tsx'))

/** One measurement: three steps from left to right as the hand works, plots below. */
export function BenchPage(given: BenchPageProps) {
  const page = useBenchPage(given)
  const props = { ...given, bench: page.bench }
  const [asTable, setTable] = useState(false)
  const [idealShown, setIdealShown] = useState(false)
  const file = usePointsFile(props, page)
  const acts = useBenchActs(props, page, {
    toggleTable: () => setTable((shown) => !shown),
    showIdeal: () => setIdealShown(true),
  })
  const grid = useLatest(page.grid)
  useLoosePaste((text) => {
    if (page.isFixed) return
    void loadPaste().then(({ pasteAction }) => {
      const action = pasteAction(grid.current, text)
      if (action) page.dispatch(action)
    })
  })
  const { bench, revision, range } = props
  const { answer } = page
  return (
    <div {...dropHandlers(file.open)}>
      <BenchHead {...props} page={page} acts={acts} onOpenFile={file.open} />
      <BenchFields {...props} page={page} acts={acts} />
      <BenchNotices {...props} page={page} />
      {file.trouble ? <FileTrouble error={file.trouble} onDismiss={file.dismiss} /> : null}
      <div className="mt-1.5 grid grid-cols-1 gap-x-7 gap-y-4 wide:grid-cols-[1.2fr_0.49fr_1fr] print:grid-cols-2 print:gap-y-2">
        <StepFound {...props} page={page} acts={acts} />
        <StepCodes {...props} page={page} />
        <StepNext {...props} page={page} acts={acts} />
      </div>
      <Plots {...props} page={page} asTable={asTable} onTable={setTable} />
      {idealShown ? (
        <IdealDialog
          design={revision.document}
          rangeId={range}
          decimals={voltDecimals(bench.channel.range.lsbV)}
          codes={answer.views.flatMap((view) => view.code ?? [])}
          onClose={() => setIdealShown(false)}
        />
      ) : null}
      {file.chosen ? (
        <ChooseMeasurement
          file={file.chosen.csv}
          name={file.chosen.name}
          onChoose={(group) => void file.take(group)}
          onClose={file.dismiss}
        />
      ) : null}
    </div>
  )
}

type PlotsProps = BenchPageProps & {
  page: ReturnType<typeof useBenchPage>
  asTable: boolean
  onTable: (asTable: boolean) => void
}

function Plots({ page, bench, asTable, onTable }: PlotsProps) {
  const { answer, chain } = page
  const unmeasured = <UnmeasuredPlots range={plotRange(bench.channel.range)} />
  if (!answer.answer && chain.length === 0) return unmeasured
  return (
    <Suspense fallback={unmeasured}>
      <BenchPlots
        design={page.document}
        bench={bench}
        points={answer.plotted?.points ?? []}
        answer={page.loaded && answer.answer ? { ...answer.answer, trim: null } : answer.answer}
        bars={answer.plotted?.bars ?? null}
        chain={chain}
        asTable={asTable}
        onTable={onTable}
      />
    </Suspense>
  )
}

type ReadFile = { csv: PointsCsv; name: string }

/** Opening a points file: into this grid, or on to the page of the unit that the file names. */
function usePointsFile(props: BenchPageProps, page: ReturnType<typeof useBenchPage>) {
  const { revision, nameFor, name, change, incoming, onIncoming } = props
  const [trouble, setTrouble] = useState<unknown>(null)
  const [chosen, setChosen] = useState<ReadFile | null>(null)
  const dismiss = () => {
    setTrouble(null)
    setChosen(null)
  }
  const take = async (group: PointGroup) => {
    dismiss()
    const { rowsOf } = await loadPointsFile()
    const rows = rowsOf(group, revision.document)
    const hasU = rows.some((row) => row.u !== '')
    const place = {
      ...(group.unit === undefined ? {} : { unit: group.unit }),
      ...(group.channel === undefined ? {} : { channel: group.channel }),
      ...(group.range === undefined ? {} : { range: group.range }),
    }
    const isSame = group.unit === undefined || group.unit === props.search.unit
    const target = nameFor(isSame ? place : { ...place, follows: null })
    const { instrument = null } = group
    if (target === name && !page.isFixed) {
      page.dispatch({ do: 'rows', rows, hasU })
      if (instrument !== null) page.setField('instrument', instrument)
    } else {
      page.flush()
      onIncoming({ name: target, rows, hasU, instrument })
    }
    const lot = group.lot === undefined ? {} : { lot: group.lot }
    const applied = group.applied === undefined ? {} : { applied: group.applied }
    change({ ...place, ...lot, ...applied, ...(isSame ? {} : { follows: null }) })
  }
  const open = (file: File) => {
    dismiss()
    const read = async () => {
      const { readPointsFile } = await loadPointsFile()
      const csv = await readPointsFile(file, revision.document)
      const [first, second] = csv.groups
      if (first && !second && csv.problems.length === 0) await take(first)
      else setChosen({ csv, name: file.name })
    }
    read().catch(setTrouble)
  }
  const { dispatch, setField } = page
  const arrived = useRef<Incoming | null>(null)
  useEffect(() => {
    if (!incoming || arrived.current === incoming) return
    arrived.current = incoming
    dispatch({ do: 'rows', rows: incoming.rows, hasU: incoming.hasU })
    if (incoming.instrument !== null) setField('instrument', incoming.instrument)
    onIncoming(null)
  }, [incoming, dispatch, setField, onIncoming])
  return { open, take, dismiss, trouble, chosen }
}
