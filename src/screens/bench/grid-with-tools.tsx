import { useState } from 'react'
import { CellProblems } from '../../features/bench/cell-problems.tsx'
import { FlagList } from '../../features/bench/flag-list.tsx'
import { flagSentences, noteSentences } from '../../features/bench/flag-sentences.ts'
import { copiedText } from '../../features/bench/grid-copy.ts'
import { GridTools } from '../../features/bench/grid-tools.tsx'
import { loadPaste, loadPointsFile } from '../../features/bench/on-demand.ts'
import { ReadingsDialog } from '../../features/bench/panels.tsx'
import { PasteReport } from '../../features/bench/paste-report.tsx'
import { PointsGrid } from '../../features/bench/points-grid.tsx'
import { useLatest } from '../../features/bench/use-latest.ts'
import { NumberText } from '../../ui/number-text.tsx'
import type { StepProps } from './step-props.ts'

/** The grid with everything that speaks about its cells. */
export function GridWithTools(props: StepProps) {
  const { page, acts, search, channel, range } = props
  const { grid, dispatch, answer, isFixed } = page
  const [readingsOf, setReadingsOf] = useState<number | null>(null)
  const latest = useLatest(grid)
  const paste = async (text: string) => {
    const { pasteAction } = await loadPaste()
    const action = pasteAction(latest.current, text)
    if (action) dispatch(action)
  }
  const takeDecimalCommas = async () => {
    const { decimalCommaAction } = await loadPaste()
    const action = decimalCommaAction(latest.current)
    if (action) dispatch(action)
  }
  const reread = () => {
    if (answer.rereadAs) dispatch({ do: 'rows', rows: answer.reread(answer.rereadAs) })
  }
  const save = async () => {
    const { savePoints } = await loadPointsFile()
    savePoints(
      {
        ...(search.unit === null ? {} : { unit: search.unit }),
        channel,
        range,
        ...(search.lot === null ? {} : { lot: search.lot }),
        ...(page.applied === null || page.applied === 'neutral' ? {} : { applied: page.applied }),
        points: [...answer.read.points],
      },
      `${search.unit ?? 'points'}-pass-${page.pass}`,
    )
  }
  return (
    <>
      <PointsGrid
        label={page.chain.length > 0 ? `Points as left, pass ${page.pass}` : 'Points as found'}
        state={grid}
        dispatch={dispatch}
        views={answer.views}
        isFixed={isFixed}
        copyText={(state) => copiedText(state, answer.views)}
        onPaste={(text) => void paste(text)}
        onScan={acts.changeUnit}
      />
      <IdealAtFocus {...props} />
      {isFixed ? null : (
        <GridTools
          state={grid}
          dispatch={dispatch}
          onReadings={() => setReadingsOf(grid.focus.row)}
          onSave={() => void save()}
          onDiscard={page.startAnew}
          canSave={answer.read.points.length > 0}
          canDiscard={page.hasReadings}
        />
      )}
      {grid.report ? (
        <PasteReport
          report={grid.report}
          onDecimalCommas={() => void takeDecimalCommas()}
          onDismiss={() => dispatch({ do: 'dismiss-report' })}
        />
      ) : null}
      <CellProblems problems={answer.problems} rereadAs={answer.rereadAs} onReread={reread} />
      <StaleSentence {...props} />
      <Guidance {...props} />
      <PageFlags {...props} />
      {readingsOf === null ? null : (
        <ReadingsDialog
          row={readingsOf}
          text={grid.rows[readingsOf]?.measured ?? ''}
          onClose={() => setReadingsOf(null)}
          onDone={(text) => {
            dispatch({ do: 'set-cell', row: readingsOf, column: 'measured', text })
            setReadingsOf(null)
          }}
        />
      )}
    </>
  )
}

/** Where the ideal column has no room, the ideal of the focused row. */
function IdealAtFocus({ page }: StepProps) {
  const view = page.answer.views[page.grid.focus.row]
  if (!view?.ideal || page.grid.focus.column !== 'code') return null
  return (
    <p className="mt-1 text-small text-ink-2 narrow:hidden">
      Ideal at this code: <NumberText>{view.ideal}</NumberText> V
    </p>
  )
}

function StaleSentence({ page }: StepProps) {
  const { answer } = page
  if (!answer.isStale || !answer.answeredAt) return null
  return (
    <p className="mt-2 text-body text-ink-2">
      Answer for the last good values, {answer.answeredAt.toISOString().slice(11, 19)} UTC.
    </p>
  )
}

function Guidance({ page }: StepProps) {
  const { answer } = page
  if (answer.problems.length > 0 || page.chain.length > 0) return null
  if (answer.answer?.fit.dofWhy === 'two-points') {
    return <p className="mt-2 text-body">Two points give a line and no uncertainty. Measure a third.</p>
  }
  if (answer.answer) return null
  return (
    <p className="mt-2 text-body">
      Type the first reading, or paste a block of readings from a spreadsheet. Units are taken:{' '}
      <span className="font-mono">4.9989783</span>, <span className="font-mono">4998.9783 mV</span>. Two
      different codes are the least that gives a line.
    </p>
  )
}

function PageFlags({ page }: StepProps) {
  const { answer } = page
  if (!answer.answer || answer.isStale) return null
  const { fit } = answer.answer
  const readingsAt = (code: number) => {
    const row = answer.views.findIndex((view) => view.code === code)
    const measured = answer.read.rows[row]?.measured
    return measured && 'readings' in measured ? measured.readings.length : 1
  }
  return <FlagList flags={flagSentences(fit, readingsAt)} notes={noteSentences(fit.notes)} />
}
