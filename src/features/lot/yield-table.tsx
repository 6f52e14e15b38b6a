import { standing as standings } from '../../../shared/contract/lot-standing.ts'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import { Whole } from '../../ui/number-text.tsx'
import { Section } from '../../ui/section.tsx'
import { Table, Td, Th } from '../../ui/table.tsx'
import { verdictTone } from '../../ui/verdict.tsx'
import { StandingWord } from './standing-word.tsx'
import { percent, standingLook } from './words.ts'

/** From best to worst; standings that never occur in most lots stand only when they do. */
const always = ['ok-first', 'ok-later', 'conditional-pass', 'too-coarse', 'suspect', 'out-of-reach']

export function YieldTable({ counts }: Pick<LotDetail, 'counts'>) {
  const rows = [...standings.options]
    .reverse()
    .filter((one) => always.includes(one) || counts.byStanding[one] > 0)
  const share = (n: number) => percent(counts.units === 0 ? null : n / counts.units)
  return (
    <Section title="Yield" side={`${counts.good} of ${counts.units} good`}>
      <Table caption="Units by how they stand, from best to worst">
        <thead>
          <tr>
            <Th>worst channel, last pass</Th>
            <Th align="right">units</Th>
            <Th align="right">share</Th>
            <Th className="hidden w-2/5 narrow:table-cell">
              <span className="sr-only">bar</span>
            </Th>
          </tr>
        </thead>
        <tbody>
          {rows.map((one) => (
            <tr key={one}>
              <Td>
                <StandingWord standing={one} />
              </Td>
              <Td align="right">
                <Whole value={counts.byStanding[one]} />
              </Td>
              <Td align="right">{share(counts.byStanding[one])}</Td>
              <Td className="hidden narrow:table-cell">
                <Bar n={counts.byStanding[one]} of={counts.units} tone={toneOf(one)} />
              </Td>
            </tr>
          ))}
          <tr className="font-semibold">
            <Td>Yield</Td>
            <Td align="right">
              <Whole value={counts.good} />
            </Td>
            <Td align="right">{percent(counts.share)}</Td>
            <Td className="hidden font-normal text-ink-2 narrow:table-cell">
              {counts.low95 === null
                ? null
                : `95 % interval ${percent(counts.low95).replace(' %', '')} to ${percent(counts.high95)}`}
            </Td>
          </tr>
        </tbody>
      </Table>
      <p className="mt-1 text-small text-ink-3">
        Good: accepted codes in every channel and range that units of this lot have, and a pass where verified
        after the last trim.{' '}
        {counts.references > 0 ? `${counts.references} reference units are left out. ` : ''}
        {counts.missing > 0 ? `${counts.missing} expected and not recorded are not counted.` : ''}
      </p>
    </Section>
  )
}

const toneOf = (one: (typeof standings.options)[number]) => {
  const { verdict } = standingLook[one]
  return verdict === null ? 'text-ink-2' : verdictTone(verdict)
}

function Bar({ n, of, tone }: { n: number; of: number; tone: string }) {
  if (n === 0) return null
  return (
    <svg aria-hidden="true" className={`block w-full ${tone}`} height={8}>
      <rect width={`${(100 * n) / Math.max(1, of)}%`} height={8} fill="currentColor" />
    </svg>
  )
}
