import { useQuery } from '@tanstack/react-query'
import { calibrationState, overdueSentence } from '../../../shared/calibration.ts'
import type { Design } from '../../../shared/contract/design.ts'
import { type Instrument, listInstruments } from '../../../shared/contract/instruments.ts'
import { api } from '../../lib/api.ts'
import { readStored, writeStored } from '../../lib/storage.ts'

/** Which instrument measures at this bench. Nothing named: the limits that the design states. */

const name = 'bench.instrument'

export function rememberedInstrument(): string {
  const stored = readStored(name)
  return typeof stored === 'string' ? stored : ''
}

export function rememberInstrument(id: string): void {
  writeStored(name, id === '' ? null : id)
}

export type BenchInstrument = {
  /** Those that may be chosen, and the one named although it may not. */
  choices: readonly (readonly [string, string])[]
  named: Instrument | null
  /** Why nothing can be recorded with it. */
  trouble: string | null
  /** What will be said on the record. */
  caution: string | null
}

/** What is known of the instrument that was named; the server decides in the end. */
export function useInstrument(id: string): BenchInstrument {
  const { data, dataUpdatedAt } = useQuery({
    queryKey: ['instruments'],
    queryFn: ({ signal }) => api(listInstruments, {}, signal),
    staleTime: 60_000,
  })
  const items = data?.items ?? []
  const named = items.find((one) => one.id === id) ?? null
  const live = items.filter((one) => one.retiredAt === null)
  const choices = live.map((one) => [one.id, choiceText(one, dataUpdatedAt)] as const)
  const isGone = id !== '' && !live.some((one) => one.id === id)
  return {
    choices: [['', 'as in the design'], ...choices, ...(isGone ? [[id, id] as const] : [])],
    named,
    ...judged(id, named, data !== undefined, data?.overdueAllowed ?? false, dataUpdatedAt),
  }
}

function choiceText({ id, dueOn }: Instrument, atMs: number): string {
  const state = calibrationState(dueOn, atMs)
  if (state === 'overdue') return `${id}, overdue`
  return state === 'soon' ? `${id}, due ${dueOn}` : id
}

function judged(
  id: string,
  named: Instrument | null,
  isRead: boolean,
  overdueAllowed: boolean,
  atMs: number,
): Pick<BenchInstrument, 'trouble' | 'caution'> {
  const none = { trouble: null, caution: null }
  if (id === '' || !isRead) return none
  if (named === null) return { ...none, trouble: `There is no instrument ${id}. Choose another.` }
  if (named.retiredAt !== null) return { ...none, trouble: `${id} is retired. Choose another.` }
  if (calibrationState(named.dueOn, atMs) !== 'overdue') return none
  const sentence = overdueSentence(id, named.dueOn)
  if (overdueAllowed) return { ...none, caution: `${sentence} The site allows it; the record will say so.` }
  return { ...none, trouble: `${sentence} Recording needs another instrument.` }
}

/** The design as it is measured with that instrument: its limits stand in for the design's. */
export function measuredWith(design: Design, instrument: Instrument | null): Design {
  if (instrument === null) return design
  const { id, gainPpm, offsetV } = instrument
  const limits = { id, gainPpm, offsetV }
  return { ...design, measurement: { ...design.measurement, instrument: limits } }
}
