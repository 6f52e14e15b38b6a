import type { RefObject } from 'react'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { gapsOf, numberOr, type RecordRows } from './record-rows.tsx'
import { kindWord } from './words.ts'

/** The narrow form: two lines a record, unit and verdict, time and gain. The whole row is one link. */
export function RecordList({ rows, count, total, body, height, row, onRow }: RecordRows) {
  const { before, after } = gapsOf(rows, count)
  return (
    // Space stands for the rows that are not drawn: a list may hold nothing but its items.
    <ul
      ref={body as RefObject<HTMLUListElement | null>}
      className="flow-root print:pb-0!"
      style={{ paddingBottom: after * height }}
    >
      {rows.map(({ index, record }, i) => (
        <li
          key={record?.id ?? index}
          className={`h-[calc(3rem+1px)] border-b border-hair print:mt-0! ${index === row ? 'bg-shade' : ''}`}
          style={{ marginTop: (before[i] ?? 0) * height }}
          aria-setsize={total === undefined ? undefined : (total ?? -1)}
          aria-posinset={total === undefined ? undefined : index + 1}
        >
          {record === undefined ? null : (
            <LinkButton
              look="quiet"
              className="block! h-12 w-full scroll-my-14 px-1! py-1.5 no-underline! whitespace-normal"
              to={paths.record(record.id)}
              data-row={index}
              onFocus={() => onRow(index)}
            >
              <span className="flex justify-between gap-3">
                <span className="truncate font-semibold" title={record.unit}>
                  {record.unit}
                </span>
                {record.verdict ? <Verdict verdict={record.verdict} /> : <span>{kindWord(record)}</span>}
              </span>
              <span className="flex justify-between gap-3">
                <span className="text-ink-2">
                  <TimeText at={record.recordedAt} />
                </span>
                {record.gainErrorPpm === null ? null : (
                  <span className="whitespace-nowrap">
                    {numberOr(record.gainErrorPpm, 2, 1, true)} <span className="text-ink-2">ppm</span>
                  </span>
                )}
              </span>
            </LinkButton>
          )}
        </li>
      ))}
    </ul>
  )
}
