import type { RecordLine } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { None, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { byText, kindWord } from './words.ts'

const onlyWide = 'hidden wide:table-cell'

/** One page of records. `row` is the current row; links of rows carry `data-row` for the keys. */
export function RecordTable({ records, row }: { records: readonly RecordLine[]; row: number }) {
  return (
    <Table caption="Records, newest first">
      <thead>
        <tr>
          <Th align="right">record</Th>
          <Th>time, UTC</Th>
          <Th>unit</Th>
          <Th align="right">ch.</Th>
          <Th className={onlyWide}>design, rev.</Th>
          <Th>kind</Th>
          <Th align="right" className={onlyWide}>
            pass
          </Th>
          <Th align="right" className={onlyWide}>
            att.
          </Th>
          <Th align="right" unit="ppm" className="text-copper">
            gain error
          </Th>
          <Th align="right" unit="µV" className="text-tide">
            offset error
          </Th>
          <Th align="right" unit="code" className={onlyWide}>
            gain
          </Th>
          <Th align="right" unit="code" className={onlyWide}>
            offset
          </Th>
          <Th align="right" unit="LSB">
            worst
          </Th>
          <Th>verdict</Th>
          <Th className={onlyWide}>by</Th>
        </tr>
      </thead>
      <tbody>
        {records.map((record, i) => (
          <RecordRow key={record.id} record={record} index={i} current={i === row} />
        ))}
      </tbody>
    </Table>
  )
}

function RecordRow({ record, index, current }: { record: RecordLine; index: number; current: boolean }) {
  return (
    <tr className={`focus-within:bg-shade ${current ? 'bg-shade' : ''}`}>
      <Td align="right">
        <LinkButton className="min-h-6" to={paths.record(record.id)} data-row={index}>
          <Whole value={record.number} />
        </LinkButton>
      </Td>
      <Td className="text-ink-2">
        <TimeText at={record.recordedAt} />
      </Td>
      <Td className="max-w-56 [overflow-wrap:anywhere]">{record.unit}</Td>
      <Td align="right">{record.channel}</Td>
      <Td className={`text-ink-2 ${onlyWide}`}>
        {record.design}, {record.revision}
      </Td>
      <Td className="text-ink-2">{kindWord(record)}</Td>
      <Td align="right" className={onlyWide}>
        {record.pass}
      </Td>
      <Td align="right" className={onlyWide}>
        <Attempt attempt={record.attempt} />
      </Td>
      <Td align="right">{numberOr(record.gainErrorPpm, 2, 1, true)}</Td>
      <Td align="right">{numberOr(record.offsetErrorV, 1, 1e6, true)}</Td>
      <Td align="right" className={onlyWide}>
        {record.gainCode ?? <None />}
      </Td>
      <Td align="right" className={onlyWide}>
        {record.offsetCode ?? <None />}
      </Td>
      <Td align="right">
        {numberOr(record.worstLsb === null ? null : Math.abs(record.worstLsb), 2, 1, false)}
      </Td>
      <Td>
        {record.verdict ? <Verdict verdict={record.verdict} /> : <None />}
        <FindingMark finding={record.finding} />
      </Td>
      <Td className={onlyWide}>{byText(record.by, record.station)}</Td>
    </tr>
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

function numberOr(value: number | null, decimals: number, factor: number, signed: boolean) {
  if (value === null) return <None />
  return <NumberText>{fixed(value * factor, decimals, signed ? 'always' : 'auto')}</NumberText>
}

/** The narrow form: two lines a record, unit and verdict, time and gain. The whole row is one link. */
export function RecordList({ records, row }: { records: readonly RecordLine[]; row: number }) {
  return (
    <ul>
      {records.map((record, i) => (
        <li key={record.id} className={`border-b border-hair ${i === row ? 'bg-shade' : ''}`}>
          <LinkButton
            look="quiet"
            className="block! w-full px-1! py-1.5 no-underline! whitespace-normal"
            to={paths.record(record.id)}
            data-row={i}
          >
            <span className="flex justify-between gap-3">
              <span className="font-semibold">{record.unit}</span>
              {record.verdict ? <Verdict verdict={record.verdict} /> : <span>{kindWord(record)}</span>}
            </span>
            <span className="flex justify-between gap-3">
              <span className="text-ink-2">
                <TimeText at={record.recordedAt} />
              </span>
              {record.gainErrorPpm === null ? null : (
                <span>
                  {numberOr(record.gainErrorPpm, 2, 1, true)} <span className="text-ink-2">ppm</span>
                </span>
              )}
            </span>
          </LinkButton>
        </li>
      ))}
    </ul>
  )
}
