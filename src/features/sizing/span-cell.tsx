import type { KeyboardEvent } from 'react'
import type { SpanCell } from '../../../shared/solver/sizing/span-table.ts'
import { VerdictMark, verdictTone } from '../../ui/verdict.tsx'
import { verdictNames } from './ladder-words.ts'
import { cellSentence, marginText } from './span-words.ts'

type SpanCellButtonProps = {
  cell: SpanCell
  /** "10 bits, ±5 V" */
  name: string
  place: string
  isStop: boolean
  onKeyDown: (event: KeyboardEvent<HTMLElement>) => void
  onTry: (() => void) | undefined
}

/** Shape and step margin; the design's own cell is boxed. A table that only shows has no buttons. */
export function SpanCellButton({ cell, name, place, isStop, onKeyDown, onTry }: SpanCellButtonProps) {
  const verdict = verdictNames[cell.verdict]
  const look = `inline-flex min-h-6 w-full items-center justify-end gap-0.5 px-[3px] text-small ${cell.own ? 'outline-2 -outline-offset-1 outline-ink' : ''}`
  const content = (
    <>
      <VerdictMark verdict={verdict} />
      <span className={cell.verdict === 'covers' ? '' : verdictTone(verdict)}>
        {marginText(cell.stepSpareBits)}
      </span>
    </>
  )
  if (!onTry) {
    return (
      <span className={look}>
        <span className="sr-only">{cellSentence(name, cell)}</span>
        <span aria-hidden="true" className="contents">
          {content}
        </span>
      </span>
    )
  }
  return (
    <button
      type="button"
      data-cell={place}
      aria-label={cellSentence(name, cell)}
      aria-current={cell.own ? 'true' : undefined}
      tabIndex={isStop ? 0 : -1}
      onKeyDown={onKeyDown}
      onClick={onTry}
      className={`${look} hover:bg-shade focus-visible:outline-focus`}
    >
      {content}
    </button>
  )
}
