import type { LotDetail, LotUnit } from '../../../shared/contract/lots.ts'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { Section } from '../../ui/section.tsx'
import { Table, Td, Th } from '../../ui/table.tsx'
import { utcText } from '../../ui/time-text.tsx'
import { StandingWord } from './standing-word.tsx'
import { whySentence } from './words.ts'

type Place = LotUnit['places'][number]
export type AttentionRow = { unit: string; place: Place | null; standing: LotUnit['standing'] }

/** Channels that are worth a look, worst first, then oldest first. A unit that lacks a channel stands once. */
export function attentionRows(units: readonly LotUnit[], order: readonly string[]): AttentionRow[] {
  const rows = units
    .filter(({ reference, places }) => !reference && places.length > 0)
    .flatMap(({ unit, standing, places }): AttentionRow[] => {
      const marked = places
        .filter(({ attention }) => attention !== null)
        .map((place) => ({ unit, place, standing: place.standing }))
      return standing === 'incomplete' ? [...marked, { unit, place: null, standing }] : marked
    })
  const timeOf = ({ place }: AttentionRow) => place?.attention?.at ?? ''
  return rows.sort(
    (a, b) => order.indexOf(a.standing) - order.indexOf(b.standing) || (timeOf(a) < timeOf(b) ? -1 : 1),
  )
}

type Props = {
  lot: LotDetail
  rows: readonly AttentionRow[]
  row: number
  shown: number
  hasChannels: boolean
  onMore: () => void
}

/** What to do now. On wide pages a table; on a phone two lines a unit. Links carry `data-row` for the keys. */
export function AttentionList({ lot, rows, row, shown, hasChannels, onMore }: Props) {
  return (
    <Section
      title="Units needing attention"
      side={`${new Set(rows.map(({ unit }) => unit)).size} of ${lot.counts.units}`}
    >
      {rows.length === 0 ? (
        <p className="py-1 text-ink-2">None.</p>
      ) : (
        <Table caption="Units needing attention, worst first">
          <thead>
            <tr>
              <Th>unit</Th>
              <Th>verdict</Th>
              <Th className="hidden medium:table-cell">why</Th>
              <Th className="hidden medium:table-cell">station</Th>
              <Th className="hidden medium:table-cell" unit="UTC">
                time
              </Th>
              <Th>
                <span className="sr-only">acts</span>
              </Th>
            </tr>
          </thead>
          <tbody>
            {rows.slice(0, shown).map((one, i) => (
              <Row
                key={`${one.unit} ${one.place?.range} ${one.place?.channel}`}
                lot={lot}
                one={one}
                index={i}
                current={i === row}
                hasChannels={hasChannels}
              />
            ))}
          </tbody>
        </Table>
      )}
      {rows.length > shown ? (
        <Button className="mt-2" onClick={onMore}>
          {`${rows.length - shown} more`}
        </Button>
      ) : null}
    </Section>
  )
}

type RowProps = { lot: LotDetail; one: AttentionRow; index: number; current: boolean; hasChannels: boolean }

function Row({ lot, one: { unit, place, standing }, index, current, hasChannels }: RowProps) {
  const attention = place?.attention ?? null
  const why = attention ? whySentence(attention) : 'A channel or range that others have is not recorded.'
  const bench = { design: lot.design, unit, lot: lot.key, channel: place?.channel, range: place?.range }
  const name = hasChannels && place ? `${unit} · ${place.channel}` : unit
  return (
    <tr className={`focus-within:bg-shade ${current ? 'bg-shade' : ''}`}>
      <Td className="align-top [overflow-wrap:anywhere]">
        {attention ? (
          <LinkButton data-row={index} className="min-h-6" to={paths.record(attention.record)}>
            {name}
          </LinkButton>
        ) : (
          name
        )}
      </Td>
      <Td className="align-top">
        <StandingWord standing={standing} />
        <span className="block medium:hidden">{why}</span>
      </Td>
      <Td className="hidden align-top medium:table-cell">{why}</Td>
      <Td className="hidden align-top whitespace-nowrap medium:table-cell">{attention?.station ?? ''}</Td>
      <Td className="hidden align-top whitespace-nowrap text-ink-2 medium:table-cell">
        {attention ? utcText(attention.at).slice(5, 16) : ''}
      </Td>
      <Td align="right" className="align-top print:hidden">
        <LinkButton className="min-h-6" to={paths.benchFor(bench)}>
          Bench
        </LinkButton>
      </Td>
    </tr>
  )
}
