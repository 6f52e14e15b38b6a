import { useQuery, useQueryClient } from '@tanstack/react-query'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { engineering, fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { VerdictMark, verdictWord } from '../../ui/verdict.tsx'
import { chainOptions } from './queries.ts'
import { kindWord } from './words.ts'

/** Where in the story of the unit this record stands: what it follows, oldest first. */
export function Chain({ record }: { record: TrimRecord }) {
  const chain = useQuery(chainOptions(useQueryClient(), record))
  if (record.follows === null) return null
  const records = [...(chain.data ?? []), record]
  return (
    <Section
      title="Chain of passes"
      note={chain.data ? `${records.length} records; none can be changed or removed` : 'reading'}
    >
      {chain.error ? <Problem error={chain.error} /> : null}
      <ol className="flex overflow-x-auto pb-1">
        {records.map((one, i) => (
          <li key={one.id} className="min-w-48 max-w-80 flex-1 pr-4">
            <p className="mb-1 font-semibold">{linkName(one)}</p>
            <p className="flex h-4 items-center gap-1">
              {one.verdict ? <VerdictMark verdict={one.verdict} /> : <span className="size-2 bg-ink-3" />}
              {i < records.length - 1 ? <span className="h-px flex-1 bg-rule" /> : null}
            </p>
            <p className="text-small text-ink-2">
              {one.id === record.id ? (
                <strong className="font-semibold text-ink">
                  {'record '}
                  <Whole value={one.number} />
                </strong>
              ) : (
                <LinkButton className="min-h-6 text-small" to={paths.record(one.id)}>
                  <span>
                    record <Whole value={one.number} />
                  </span>
                </LinkButton>
              )}
            </p>
            <p className="text-small text-ink-2">
              <TimeText at={one.recordedAt} />
            </p>
            <ChainResult record={one} />
          </li>
        ))}
      </ol>
    </Section>
  )
}

function linkName(record: TrimRecord): string {
  if (record.kind === 'trim' && record.pass <= 1) return 'as found, pass 1'
  if (record.kind === 'verify') return `as left, pass ${record.pass}`
  return record.kind === 'trim' ? `refine, pass ${record.pass}` : kindWord(record)
}

function ChainResult({ record }: { record: TrimRecord }) {
  const { result } = record
  if (result?.format === 'ogee.codes/1') {
    const codes = [result.trim.codes?.gain, result.trim.codes?.offset].filter((code) => code !== undefined)
    return (
      <>
        <p className="text-small">
          {codes.length > 0 ? `codes ${codes.join(' / ')}` : verdictWord(result.trim.verdict)}
        </p>
        <p className="text-small text-ink-2">
          {'gain '}
          <NumberText>{fixed(result.fit.gainErrorPpm, 1, 'always')}</NumberText>
          {' ppm, offset '}
          <NumberText>{engineering(result.fit.offsetErrorV, 'V', 2, 'always')}</NumberText>
        </p>
      </>
    )
  }
  if (result?.format === 'ogee.verify/1') {
    return (
      <>
        <p className="text-small">{verdictWord(result.outcome)}</p>
        <p className="text-small text-ink-2">worst {fixed(Math.abs(result.worst.errorLsb), 2)} LSB</p>
      </>
    )
  }
  return <p className="text-small text-ink-2">{record.reason}</p>
}
