import { useMemo, useState } from 'react'
import type { Point } from '../../../shared/contract/point.ts'
import { pointFields } from '../../../shared/quantity/field.ts'
import type { Applied } from '../../../shared/solver/types.ts'
import { emptyRow, hasReadings } from '../../features/bench/grid-state.ts'
import { readQuantity } from '../../features/bench/read-cells.ts'
import { type TrimBody, trimBody } from '../../features/bench/trim-body.ts'
import { useAnswer } from '../../features/bench/use-answer.ts'
import { useKeptDraft } from '../../features/bench/use-kept-draft.ts'
import { useRecording } from '../../features/bench/use-recording.ts'
import { notReleased } from '../../features/bench/words.ts'
import { usePerson } from '../../features/session/use-person.ts'
import type { BenchPageProps } from './bench-props.ts'

const mayRecord = new Set(['engineer', 'operator'])

/** Everything that the page knows while one measurement is on it. */
export function useBenchPage(props: BenchPageProps) {
  const { name, revision, bench, known } = props
  const person = usePerson()
  const document = revision.document
  const chain = known.chain
  const planned = useMemo(
    () =>
      (chain.at(-1)?.result.fit.residuals.map((point) => point.code) ?? document.measurement.points).map(
        (code) => emptyRow(String(code)),
      ),
    [chain, document],
  )
  const kept = useKeptDraft(name, chain.length > 0 ? 'left' : 'found', planned)
  const applied = appliedNow(props)
  const [effects, setEffects] = useState<'design' | 'learned'>('learned')
  const previous = chain.at(-1)
  const answerPrevious = useMemo(
    () => (previous && effects === 'learned' ? previous.result : null),
    [previous, effects],
  )
  const recording = useRecording({
    draftName: name,
    person: person.id,
    fields: kept.fields,
    setField: kept.setField,
    rows: kept.draft.rows,
  })
  const answer = useAnswer({
    design: document,
    bench,
    rows: kept.draft.rows,
    applied,
    previous: answerPrevious,
    refused: recording.refusal?.errors ?? none,
  })
  const temperature = readQuantity(kept.fields.temperature, pointFields.temperature, () => 'pending')
  const released = props.designs
    .find((design) => design.key === revision.key)
    ?.revisions.filter((one) => one.state === 'released')
    .map((one) => one.number)
  const shut =
    notReleased(revision, released ?? []) ??
    (mayRecord.has(person.role) ? null : 'Recording is open to engineers and operators.')
  const isFixed = recording.recorded !== null || recording.waiting !== null || recording.isBusy
  return {
    person,
    document,
    chain,
    pass: (previous?.pass ?? 0) + 1,
    planned,
    ...kept,
    applied,
    effects,
    setEffects,
    answer,
    recording,
    temperatureTrouble: temperature.is === 'wrong' ? temperature.why : null,
    shut,
    isFixed,
    hasReadings: hasReadings(kept.draft.rows),
    body: () =>
      bodyOf(props, { applied, effects, points: answer.read.points, temperature, note: kept.fields.note }),
  }
}

type Typed = {
  applied: Applied | null
  effects: 'design' | 'learned'
  points: readonly Point[]
  temperature: ReturnType<typeof readQuantity>
  note: string
}

function bodyOf(props: BenchPageProps, typed: Typed): TrimBody | null {
  const { revision, channel, range, search, known } = props
  const { applied, effects, points, temperature, note } = typed
  if (applied === null || search.unit === null) return null
  return trimBody({
    design: revision.key,
    revision: revision.number,
    unit: search.unit,
    channel,
    range,
    lot: search.lot ?? '',
    applied,
    follows: search.follows,
    effects: known.chain.length > 0 ? effects : 'design',
    points,
    temperatureC: temperature.is === 'value' ? temperature.value : null,
    note,
  })
}

const none = [] as const

export type BenchPageState = ReturnType<typeof useBenchPage>

/**
 * Codes applied while measuring: as the address says; those of the pass that is followed; neutral for a unit without
 * codes. A unit with codes has to say: null.
 */
function appliedNow({ search, known }: BenchPageProps) {
  if (search.applied !== null) return search.applied
  const last = known.chain.at(-1)
  if (last) return last.result.trim.codes
  return known.isKnown && !known.current?.codes ? 'neutral' : null
}

/** What still stands between the readings and a record; null when it can be recorded. */
export function missingForRecord(page: BenchPageState, unit: string | null): string | null {
  if (page.shut !== null) return page.shut
  if (unit === null) return 'Unit is missing.'
  if (page.applied === null) return 'Say which codes were applied while measuring.'
  if (page.temperatureTrouble !== null) return page.temperatureTrouble
  if (page.answer.isStale || page.answer.problems.length > 0) return 'A cell is in error.'
  if (page.answer.answer?.trim) return null
  return page.answer.solved.is === 'refused'
    ? page.answer.solved.error.message
    : 'Two different codes are the least that gives a line.'
}
