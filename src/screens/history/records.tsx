import { useEffect, useRef, useState } from 'react'
import { chainFrom, pageAt, rowsOf } from '../../features/record/page-chain.ts'
import { RecordList } from '../../features/record/record-list.tsx'
import { RecordTable } from '../../features/record/record-table.tsx'
import { useKeys } from '../../lib/keys.ts'
import { Button } from '../../ui/button.tsx'
import { Problem } from '../../ui/problem.tsx'
import { remPx, rowPx, useRowWindow } from '../../ui/row-window.tsx'
import { useMedia } from '../../ui/use-media.ts'
import { usePrinting } from '../../ui/use-printing.ts'
import { useRowKeys } from '../../ui/use-row-keys.ts'
import { HistoryFoot } from './history-foot.tsx'
import { NoRecords } from './no-records.tsx'
import { usePages } from './use-pages.ts'
import type { Place, View } from './use-view.ts'

/** An address that is rewritten while one scrolls makes the browser refuse it; it is when the scrolling rests. */
const restMs = 200

type Props = { view: View; onKeep: (place: Place) => void; onNewest: () => void }

/** The records of one view as one list: scrolling reads on, and what is far from the view is not kept. */
export function Records({ view, onKeep, onNewest }: Props) {
  const [chain, setChain] = useState(() => chainFrom(view.starts))
  // Nowhere to go for who is there already: a frame later it would undo the reader's own first scrolling.
  const [goal, setGoal] = useState(() => (view.top === 0 && window.scrollY === 0 ? null : view.top))
  const count = rowsOf(chain)
  const keys = useRowKeys(count, view.top)
  const wide = useMedia('(min-width: 48rem)', true)
  const body = useRef<HTMLElement>(null)
  // Two lines of the narrow form, and its space above and below, or a row of the table.
  const height = wide ? rowPx() : 3 * remPx() + 1
  const list = useRowWindow(body, count, height)
  const drawn = withCurrent(rowsBetween(list.first, list.end), keys.row, count)
  // Where one is going is read as well, though nothing of it is drawn yet.
  const near = goal === null ? drawn : [...drawn, goal]
  const pages = usePages(view.filters, chain, setChain, near, list.top === 0)
  const isPrinting = usePrinting()
  const fromNewest = chain.starts[0]?.after === ''
  const { top, show } = list
  useKept(view, { starts: chain.starts.slice(0, pageAt(chain, top) + 1), top }, goal === null, onKeep)
  useEffect(() => {
    if (goal === null || goal >= count) return
    // After the frame has turned to the top of a new page.
    const frame = requestAnimationFrame(() => {
      show(goal)
      setGoal(null)
    })
    return () => cancelAnimationFrame(frame)
  })
  const goTo = (row: number) => {
    if (row < count) keys.set(row)
    setGoal(row)
  }
  const hasOlder = chain.end === null || list.bottom < chain.end - 1
  const hasNewer = top > 0 || !fromNewest
  const older = () => {
    if (hasOlder) goTo(chain.starts[pageAt(chain, top) + 1]?.first ?? count - 1)
  }
  const newer = () => {
    const start = chain.starts[pageAt(chain, top)]?.first ?? 0
    if (top > 0) goTo(start < top ? start : (chain.starts[pageAt(chain, top) - 1]?.first ?? 0))
    else if (!fromNewest) onNewest()
  }
  useKeys([
    { keys: 'j', does: 'next record', run: () => keys.move(1) },
    { keys: 'k', does: 'previous record', run: () => keys.move(-1) },
    { keys: 'Enter', does: 'open the record', run: keys.open },
    { keys: ']', does: 'older records', run: older },
    { keys: '[', does: 'newer records', run: newer },
  ])
  if (chain.end === 0) return <NoRecords filters={view.filters} older={!fromNewest} />
  const printed = pages.atHand(top)
  const shown = isPrinting ? rowsBetween(printed.first, printed.end) : drawn
  const List = wide ? RecordTable : RecordList
  return (
    <div className="flex flex-col">
      <HistoryFoot
        first={pages.record(isPrinting ? printed.first : top)}
        last={pages.record(isPrinting ? printed.end - 1 : list.bottom)}
        onOlder={hasOlder ? older : undefined}
        onNewer={hasNewer ? newer : undefined}
        isReading={pages.isReading}
      />
      <List
        rows={shown.map((index) => ({ index, record: pages.record(index) }))}
        count={count}
        total={fromNewest ? chain.end : undefined}
        height={height}
        body={body}
        row={keys.row}
        onRow={keys.set}
      />
      {pages.error ? (
        <div className="flex flex-wrap items-center gap-3 py-2">
          <Problem error={pages.error} />
          <Button onClick={pages.retry}>Try again</Button>
        </div>
      ) : null}
    </div>
  )
}

const rowsBetween = (first: number, end: number) => Array.from({ length: end - first }, (_, i) => first + i)

/** The current row is always drawn, for it may have the focus. */
const withCurrent = (rows: readonly number[], current: number, count: number) =>
  rows.includes(current) || current >= count ? rows : [...rows, current].sort((a, b) => a - b)

/** Puts the place into the address when the scrolling rests. */
function useKept(view: View, place: Place, isSettled: boolean, onKeep: (place: Place) => void): void {
  const written = useRef(view.top)
  const latest = useRef({ place, onKeep })
  latest.current = { place, onKeep }
  const { top } = place
  useEffect(() => {
    if (!isSettled || top === written.current) return
    const timer = setTimeout(() => {
      written.current = top
      latest.current.onKeep(latest.current.place)
    }, restMs)
    return () => clearTimeout(timer)
  }, [isSettled, top])
}
