import { Fragment, type RefObject } from 'react'
import type { RecordLine } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { rowHeight, Spacer, stickyHead } from '../../ui/row-window.tsx'
import { None, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { gapsOf, numberOr, type RecordRows } from './record-rows.tsx'
import { byText, kindWord } from './words.ts'

/** What a narrower page leaves out first. */
const fromRail = 'hidden rail:table-cell print:table-cell'
const fromWide = 'hidden wide:table-cell'
const fromFull = 'hidden min-[84rem]:table-cell'
/** Paper on its side has room for the codes, and not for all. */
const design = `${fromWide} print:table-cell`
const code = `${fromFull} print:table-cell`

/** Fixed columns: widths that follow the rows in view would jump while scrolling. */
export function RecordTable({ rows, count, total, body, height, row, onRow }: RecordRows) {
  const { before, after } = gapsOf(rows, count)
  return (
    <table
      className="w-full table-fixed border-collapse text-body"
      aria-rowcount={total == null ? -1 : total + 1}
    >
      <caption className="sr-only">Records, newest first</caption>
      <RecordHead />
      <tbody ref={body as RefObject<HTMLTableSectionElement | null>}>
        {rows.map(({ index, record }, i) => (
          <Fragment key={record?.id ?? index}>
            <Spacer px={(before[i] ?? 0) * height} />
            <tr
              className={`${rowHeight} focus-within:bg-shade ${index === row ? 'bg-shade' : ''}`}
              aria-rowindex={total === undefined ? undefined : index + 2}
              onFocus={() => onRow(index)}
            >
              {record === undefined ? <td colSpan={15} /> : <RecordCells record={record} index={index} />}
            </tr>
          </Fragment>
        ))}
        <Spacer px={after * height} />
      </tbody>
    </table>
  )
}

function RecordHead() {
  return (
    <thead className={`${stickyHead} z-10`}>
      <tr>
        <Th align="right" className="w-[5.25rem]">
          record
        </Th>
        <Th className="w-[9rem]">time, UTC</Th>
        <Th className="w-[8.5rem] min-[84rem]:w-[11rem]">unit</Th>
        <Th align="right" className="w-[2.25rem]">
          ch.
        </Th>
        <Th className={`w-[6.5rem] ${design}`}>design, rev.</Th>
        <Th className={`w-[4.25rem] ${fromRail}`}>kind</Th>
        <Th align="right" className={`w-[2.75rem] ${fromFull}`}>
          pass
        </Th>
        <Th align="right" className={`w-[2.5rem] ${fromFull}`}>
          att.
        </Th>
        <Th align="right" unit="ppm" className="w-[5rem] text-copper">
          gain error
        </Th>
        <Th align="right" unit="µV" className="w-[5.25rem] text-tide">
          offset error
        </Th>
        <Th align="right" unit="code" className={`w-[3.5rem] ${code}`}>
          gain
        </Th>
        <Th align="right" unit="code" className={`w-[3.5rem] ${code}`}>
          offset
        </Th>
        <Th align="right" unit="LSB" className="w-[3.5rem]">
          worst
        </Th>
        <Th>verdict</Th>
        <Th className={`w-[7rem] ${fromWide}`}>by</Th>
      </tr>
    </thead>
  )
}

function RecordCells({ record, index }: { record: RecordLine; index: number }) {
  const by = byText(record.by, record.station)
  return (
    <>
      <Td align="right">
        {/* What sticks to the top and the bottom of the view must not lie over the row that has the focus. */}
        <LinkButton className="min-h-6 scroll-my-14" to={paths.record(record.id)} data-row={index}>
          <Whole value={record.number} />
        </LinkButton>
      </Td>
      <Td className="text-ink-2">
        <TimeText at={record.recordedAt} />
      </Td>
      <Td className="truncate print:whitespace-normal" title={record.unit}>
        {record.unit}
      </Td>
      <Td align="right">{record.channel}</Td>
      <Td className={`truncate text-ink-2 ${design}`}>
        {record.design}, {record.revision}
      </Td>
      <Td className={`text-ink-2 ${fromRail}`}>{kindWord(record)}</Td>
      <Td align="right" className={fromFull}>
        {record.pass}
      </Td>
      <Td align="right" className={fromFull}>
        <Attempt attempt={record.attempt} />
      </Td>
      <Td align="right">{numberOr(record.gainErrorPpm, 2, 1, true)}</Td>
      <Td align="right">{numberOr(record.offsetErrorV, 1, 1e6, true)}</Td>
      <Td align="right" className={code}>
        {record.gainCode ?? <None />}
      </Td>
      <Td align="right" className={code}>
        {record.offsetCode ?? <None />}
      </Td>
      <Td align="right">
        {numberOr(record.worstLsb === null ? null : Math.abs(record.worstLsb), 2, 1, false)}
      </Td>
      <Td className="whitespace-nowrap">
        <span className="flex min-w-0">
          <span className="truncate">{record.verdict ? <Verdict verdict={record.verdict} /> : <None />}</span>
          <FindingMark finding={record.finding} />
        </span>
      </Td>
      <Td className={`truncate ${fromWide}`} title={by}>
        {by}
      </Td>
    </>
  )
}

/** Word and weight: an open finding is seen in the list, a closed one is still told. */
function FindingMark({ finding }: { finding: RecordLine['finding'] }) {
  if (finding === null) return null
  return (
    <span
      className={`ml-2 text-small whitespace-nowrap ${finding === 'open' ? 'font-semibold text-caution' : 'text-ink-2'}`}
    >
      {finding === 'open' ? 'finding' : 'finding, closed'}
    </span>
  )
}

/** Measured once is the rule and stays quiet; again and again on one day is seen. */
function Attempt({ attempt }: { attempt: number | null }) {
  if (attempt === null) return <None />
  if (attempt === 1) return <span className="text-ink-2">1</span>
  return (
    <span className="font-semibold" title={`measured ${attempt} times that day`}>
      {attempt}
    </span>
  )
}
