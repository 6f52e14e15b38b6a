import { useMemo, useState } from 'react'
import type { Point } from '../../../shared/contract/point.ts'
import { pointFields } from '../../../shared/quantity/field.ts'
import type { Applied } from '../../../shared/solver/types.ts'
import type { DraftFields } from '../../features/bench/draft.ts'
import { emptyRow, hasReadings } from '../../features/bench/grid-state.ts'
import { measuredWith, useInstrument } from '../../features/bench/instrument.ts'
import { previousPass } from '../../features/bench/previous.ts'
import { readQuantity } from '../../features/bench/read-cells.ts'
import { prepareBench } from '../../features/bench/solve.ts'
import { type Measured, trimBody, verifyBody } from '../../features/bench/trim-body.ts'
import { useAnswer } from '../../features/bench/use-answer.ts'
import { useKeptDraft } from '../../features/bench/use-kept-draft.ts'
import { useRecording } from '../../features/bench/use-recording.ts'
import { notReleased } from '../../features/bench/words.ts'
import { usePerson } from '../../features/session/use-person.ts'
import type { BenchPageProps } from './bench-props.ts'

const mayRecord = new Set(['engineer', 'operator'])

/** Everything that the page knows while one measurement is on it. */
export function useBenchPage(props: BenchPageProps) {
  const { name, revision, known } = props
  const person = usePerson()
  const chain = known.chain
  const planned = useMemo(
    () =>
      (
        chain.at(-1)?.result.fit.residuals.map((point) => point.code) ?? revision.document.measurement.points
      ).map((code) => emptyRow(String(code))),
    [chain, revision],
  )
  const kept = useKeptDraft(name, chain.length > 0 ? 'left' : 'found', planned)
  const { instrument, document, bench } = useMeter(props, kept.fields.instrument)
  const applied = appliedNow(props)
  const [effects, setEffects] = useState<'design' | 'learned'>('learned')
  const previous = chain.at(-1)
  const answerPrevious = useMemo(
    () => (effects === 'learned' ? previousPass(known.followed, chain, applied, bench) : null),
    [effects, known.followed, chain, applied, bench],
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
    (mayRecord.has(person.role) ? null : 'Recording is open to engineers and operators.') ??
    instrument.trouble
  const isFixed = recording.recorded !== null || recording.waiting !== null || recording.isBusy
  return {
    person,
    document,
    bench,
    instrument,
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
    /** Measured with codes loaded, so that it can be judged as left; null where the design cannot judge. */
    left: chain.length > 0 && !answer.isStale ? answer.verify : null,
    /** The codes that were loaded and stay, once these points are recorded as left. */
    loaded: recording.recorded?.kind === 'verify' && applied !== 'neutral' ? applied : null,
    /** What is recorded: new codes from these points, or these points as left. */
    body: (as: 'trim' | 'verify') => {
      const read = { applied, effects, points: answer.read.points, temperature }
      const measured = measuredOf(props, kept.fields, read)
      if (measured === null) return null
      return as === 'trim' ? trimBody(measured) : verifyBody(measured)
    },
  }
}

type Typed = {
  applied: Applied | null
  effects: 'design' | 'learned'
  points: readonly Point[]
  temperature: ReturnType<typeof readQuantity>
}

/** The instrument that was named, and the design and range as they are measured with it. */
function useMeter({ revision, bench, range }: BenchPageProps, id: string) {
  const instrument = useInstrument(id)
  const { named } = instrument
  const document = useMemo(() => measuredWith(revision.document, named), [revision, named])
  const prepared = useMemo(
    () => (named === null ? bench : prepareBench(document, range)),
    [named, bench, document, range],
  )
  return { instrument, document, bench: prepared }
}

function measuredOf(props: BenchPageProps, { note, instrument }: DraftFields, typed: Typed): Measured | null {
  const { revision, channel, range, search, known } = props
  const { applied, effects, points, temperature } = typed
  if (applied === null || search.unit === null) return null
  return {
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
    instrument,
  }
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
export function missingForRecord(
  page: BenchPageState,
  unit: string | null,
  as: 'trim' | 'verify',
): string | null {
  if (page.shut !== null) return page.shut
  if (unit === null) return 'Unit is missing.'
  if (page.applied === null) return 'Say which codes were applied while measuring.'
  if (page.temperatureTrouble !== null) return page.temperatureTrouble
  if (page.answer.isStale || page.answer.problems.length > 0) return 'A cell is in error.'
  if (as === 'verify' ? page.left !== null : page.answer.answer?.trim) return null
  return page.answer.solved.is === 'refused'
    ? page.answer.solved.error.message
    : 'Two different codes are the least that gives a line.'
}
