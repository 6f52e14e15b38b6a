import type { Lot } from '../../../shared/contract/lots.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { percent, stateWords } from './words.ts'

const onlyMedium = 'hidden medium:table-cell'
const fromNarrow = 'hidden narrow:table-cell'

/** Lots, newest first; links of rows carry `data-row` for the keys. */
export function LotTable({ lots, row }: { lots: readonly Lot[]; row: number }) {
  return (
    <Table caption="Lots, newest first">
      <thead>
        <tr>
          <Th>lot</Th>
          <Th>design, rev.</Th>
          <Th>state</Th>
          <Th align="right" className={fromNarrow}>
            units
          </Th>
          <Th align="right" className={fromNarrow}>
            good
          </Th>
          <Th align="right">yield</Th>
          <Th>to decide</Th>
          <Th align="right" className={onlyMedium}>
            missing
          </Th>
          <Th className={onlyMedium} unit="UTC">
            last record
          </Th>
          <Th className={onlyMedium}>signed off by</Th>
        </tr>
      </thead>
      <tbody>
        {lots.map((lot, i) => (
          <LotRow key={`${lot.design} ${lot.key}`} lot={lot} index={i} current={i === row} />
        ))}
      </tbody>
    </Table>
  )
}

function LotRow({ lot, index, current }: { lot: Lot; index: number; current: boolean }) {
  const { counts } = lot
  return (
    <tr className={`focus-within:bg-shade hover:bg-shade ${current ? 'bg-shade' : ''}`}>
      <RowHead>
        <LinkButton className="min-h-6" to={paths.lot(lot.design, lot.key)} data-row={index}>
          {lot.key}
        </LinkButton>
      </RowHead>
      <Td className="whitespace-nowrap text-ink-2">
        {lot.design}, {lot.revision}
      </Td>
      <Td className="whitespace-nowrap">{stateWords[lot.state]}</Td>
      <Td align="right" className={fromNarrow}>
        {counts ? <Whole value={counts.units} /> : <Counting />}
      </Td>
      <Td align="right" className={fromNarrow}>
        {counts ? <Whole value={counts.good} /> : null}
      </Td>
      <Td align="right" className="whitespace-nowrap">
        {counts ? counts.share === null ? <None /> : percent(counts.share) : null}
      </Td>
      <Td>{counts ? <ToDecide lot={lot} /> : null}</Td>
      <Td align="right" className={onlyMedium}>
        {lot.expected === null ? <None /> : counts ? <Whole value={counts.missing} /> : null}
      </Td>
      <Td className={`text-ink-2 ${onlyMedium}`}>{lot.lastAt ? <TimeText at={lot.lastAt} /> : <None />}</Td>
      <Td className={onlyMedium}>{lot.signedOff ? lot.signedOff.by : <None />}</Td>
    </tr>
  )
}

const Counting = () => <span className="text-ink-3">counting</span>

/** What stops sign-off, by its shape; nothing to do is said once by the state. */
function ToDecide({ lot: { counts, signedOff } }: { lot: Lot }) {
  if (!counts || counts.undecided === 0) return <None />
  if (signedOff) return <span className="text-ink-3">decided</span>
  const out = counts.byStanding['out-of-reach']
  if (out > 0) return <Verdict verdict="out-of-reach" word={`${out} out of reach`} />
  if (counts.byStanding.suspect > 0) {
    return <Verdict verdict="suspect" word={`${counts.byStanding.suspect} suspect`} />
  }
  return <span>{counts.undecided}</span>
}
