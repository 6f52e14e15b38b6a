import { type RefObject, useEffect, useLayoutEffect, useState } from 'react'
import { flushSync } from 'react-dom'

export const remPx = () => Number.parseFloat(getComputedStyle(document.documentElement).fontSize) || 16
/** Height of a row of a windowed table, px: the smallest target and its hairline, at the reader's own letter size. */
export const rowPx = () => 1.5 * remPx() + 1
/** The same as a class of the row. */
export const rowHeight = 'h-[calc(1.5rem+1px)]'

/** The head of a long table stays. Its rule is drawn a second time: borders that collapse scroll away with the rows. */
export const stickyHead =
  'sticky top-0 bg-paper shadow-[inset_0_-1px_0_var(--rule)] [&_th]:pt-1.5 print:static print:shadow-none'

/** Rows drawn beyond the view on either side, so that neither the wheel nor Tab meets an end. */
const beyond = 8

export type RowWindow = {
  /** The rows to draw: `first` up to, not including, `end`. */
  first: number
  end: number
  /** The first and the last row that are seen. */
  top: number
  bottom: number
  /** Scrolls the page until a row is at the top of the view. */
  show: (row: number) => void
}

/**
 * Which rows of a long list are near the view. All are equally high, so that neither time nor memory grows with their number.
 * @param rows the element whose children the rows are
 * @param count rows there are
 * @param height of a row, px
 * @param box what scrolls; the page, where there is none
 */
export function useRowWindow(
  rows: RefObject<HTMLElement | null>,
  count: number,
  height: number,
  box?: RefObject<HTMLElement | null>,
): RowWindow {
  const [seen, setSeen] = useState({ top: 0, bottom: 0 })
  const look = () => {
    const found = rows.current ? measure(rows.current, box?.current ?? null) : null
    if (!found) return seen
    const top = Math.floor(found.from / height + 0.01)
    const bottom = Math.ceil(found.to / height - 0.01) - 1
    return top === seen.top && bottom === seen.bottom ? seen : { top, bottom }
  }
  useLayoutEffect(() => setSeen(look()))
  useEffect(() => {
    // Drawn in the very frame that shows the new place.
    const follow = () => flushSync(() => setSeen(look()))
    const scroller = box?.current ?? window
    scroller.addEventListener('scroll', follow, { passive: true })
    window.addEventListener('resize', follow)
    return () => {
      scroller.removeEventListener('scroll', follow)
      window.removeEventListener('resize', follow)
    }
  })
  const inside = (row: number) => Math.max(0, Math.min(count - 1, row))
  return {
    first: inside(seen.top - beyond),
    end: Math.max(0, Math.min(count, seen.bottom + beyond + 1)),
    top: inside(seen.top),
    bottom: inside(seen.bottom),
    show: (row) => {
      if (row === 0) window.scrollTo(0, 0)
      else if (rows.current) window.scrollTo(0, pageTop(rows.current) + row * height)
    },
  }
}

/** The stretch of the list that is seen, px from its beginning; what sticks over it hides it. */
function measure(rows: HTMLElement, box: HTMLElement | null): { from: number; to: number } {
  const begin = rows.getBoundingClientRect().top
  const viewTop = box ? box.getBoundingClientRect().top : 0
  const viewHeight = box ? box.clientHeight : window.innerHeight
  const foot = document.querySelector<HTMLElement>('[data-sticks=foot]')?.offsetHeight ?? 0
  return { from: viewTop + headOf(rows) - begin, to: viewTop + viewHeight - (box ? 0 : foot) - begin }
}

const headOf = (rows: HTMLElement) => rows.parentElement?.querySelector('thead')?.offsetHeight ?? 0

/** Where the page must be scrolled to for the list to begin under its head. */
const pageTop = (rows: HTMLElement) => rows.getBoundingClientRect().top + window.scrollY - headOf(rows)

/** Stands for the rows of a table that are not drawn. */
export function Spacer({ px }: { px: number }) {
  return px > 0 ? (
    <tr className="print:hidden">
      <td className="p-0" style={{ height: px }} />
    </tr>
  ) : null
}
