import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { exact } from '../../ui/number-format.ts'
import { Fact, Facts } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'

/** Under what the record was made. */
export function RecordFacts({ record }: { record: TrimRecord }) {
  const { applied, by, conditions, follows, measuredAt } = record
  return (
    <Facts>
      <Fact name="design">
        <LinkButton className="min-h-6" to={paths.design(record.design, record.revision)}>
          {`${record.design}, revision ${record.revision}`}
        </LinkButton>
      </Fact>
      <Fact name="range">{record.range}</Fact>
      {record.lot ? (
        <Fact name="lot">
          <LinkButton className="min-h-6" to={paths.lot(record.design, record.lot)}>
            {record.lot}
          </LinkButton>
        </Fact>
      ) : null}
      {applied ? <Fact name="codes applied">{appliedText(applied)}</Fact> : null}
      <Fact name="instrument">{instrumentText(record)}</Fact>
      <Fact name="conditions">{conditionsText(conditions) || <span className="text-ink-3">none</span>}</Fact>
      {conditions.note ? <Fact name="note">"{conditions.note}"</Fact> : null}
      {record.reason ? <Fact name="reason">"{record.reason}"</Fact> : null}
      {follows ? (
        <Fact name="follows">
          <LinkButton className="min-h-6" to={paths.record(follows)}>
            the record before
          </LinkButton>
        </Fact>
      ) : null}
      <Fact name="recorded by">
        {by.kind === 'person' ? `${by.name}, ${by.role}` : `token ${by.name}`}
        {record.station ? `, at ${record.station}` : ''}
      </Fact>
      {measuredAt ? (
        <Fact name="measured at">
          <TimeText at={measuredAt} /> UTC, by the station's clock
        </Fact>
      ) : null}
    </Facts>
  )
}

function appliedText(applied: NonNullable<TrimRecord['applied']>): string {
  if (applied === 'neutral') return 'neutral'
  return Object.entries(applied)
    .map(([which, code]) => `${which} ${code}`)
    .join(', ')
}

function conditionsText({ temperatureC, humidityPercent }: TrimRecord['conditions']): string {
  return [
    temperatureC === undefined ? null : `${temperatureC} °C`,
    humidityPercent === undefined ? null : `${humidityPercent} % relative humidity`,
  ]
    .filter(Boolean)
    .join(', ')
}

function instrumentText({ instrument, conditions, result }: TrimRecord): string {
  const limits = instrument ?? result?.fit?.instrument
  const name = instrument
    ? `${instrument.id}, ${instrument.title}, serial ${instrument.serial}`
    : conditions.instrument
  const text = limits ? `limits ${limits.gainPpm} ppm and ${exact(limits.offsetV, 'V')}` : null
  const due = instrument ? `calibrated ${instrument.calibratedOn}, due ${instrument.dueOn}` : null
  return [name, text, due].filter(Boolean).join('; ') || 'not stated'
}
