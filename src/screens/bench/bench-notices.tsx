import { takeFromOutbox } from '../../features/bench/outbox.ts'
import { RecordedStatus, SavedStatus } from '../../features/bench/record-status.tsx'
import { isPlaced } from '../../features/bench/use-recording.ts'
import { WaitingList } from '../../features/bench/waiting-list.tsx'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Problem } from '../../ui/problem.tsx'
import type { BenchPageProps } from './bench-props.ts'
import type { BenchPageState } from './use-bench-page.ts'

/** What stands between head and steps: where the record is, what shuts recording, what was left elsewhere. */
export function BenchNotices(props: BenchPageProps & { page: BenchPageState }) {
  const { page, name, known, leftBehind, changeUnit, change, bench } = props
  const { recording } = page
  return (
    <>
      {page.shut ? (
        <div className="mt-1" id="record-missing">
          <Caution>{page.shut}</Caution>
        </div>
      ) : null}
      {page.instrument.caution ? (
        <div className="mt-1" role="status">
          <Caution>{page.instrument.caution}</Caution>
        </div>
      ) : null}
      {bench.noTrim ? (
        <div className="mt-2">
          <Problem error={bench.noTrim} />
        </div>
      ) : null}
      {known.trouble ? (
        <div className="mt-2">
          <Problem error={known.trouble} />
        </div>
      ) : null}
      {leftBehind !== null && !page.hasReadings ? (
        <div className="mt-2" role="status">
          <Caution>
            The readings of unit {leftBehind} are kept as its draft.{' '}
            <Button look="quiet" onClick={() => changeUnit(leftBehind)}>
              Back to {leftBehind}
            </Button>
          </Caution>
        </div>
      ) : null}
      {recording.waiting ? <SavedStatus savedAt={recording.waiting.savedAt} /> : null}
      {recording.recorded ? <RecordedStatus status={recording.recorded} /> : null}
      {recording.overrideTrouble ? (
        <div className="mt-2" role="alert">
          <Caution tone="bad">The override was not taken: {recording.overrideTrouble}</Caution>
        </div>
      ) : null}
      {recording.refusal && !isPlaced(recording.refusal) ? (
        <div className="mt-2">
          <Problem error={recording.refusal} />
        </div>
      ) : null}
      <WaitingList
        person={page.person.id}
        except={name}
        onOpen={(item) => {
          takeFromOutbox(item.key)
          const { unit, channel, range, lot, applied, follows, design } = item.body
          change({
            design,
            unit,
            channel: channel ?? null,
            range: range ?? null,
            lot: lot ?? null,
            applied: applied ?? null,
            follows: follows && follows !== 'last' ? follows : null,
          })
        }}
      />
    </>
  )
}
