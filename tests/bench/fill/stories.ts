import type { Signer } from '../../../server/ledger/signer.ts'
import type { RecordBody } from '../../../shared/contract/record.ts'
import type { Random } from '../../support/random.ts'
import { addRecord, type Maker, type Rows } from './rows.ts'
import { type RecordTemplate, type Slots, type StoryTemplate, templateOf } from './templates.ts'

export type Teller = {
  signer: Signer
  random: Random
  stories: readonly StoryTemplate[]
  makers: readonly Maker[]
  designIds: ReadonlyMap<string, number>
  /** Counters, moved on by what is told. */
  next: { record: number; number: number; leafId: number; unitId: number }
  /** When record 0 of the filling was recorded; the others follow a minute apart. */
  startMs: number
}

export type UnitRows = { units: string[]; unitCodes: string[]; lots: Map<string, string> }

/** A minute apart whatever the count, so that a page of ten thousand looks like one of a million. Milliseconds. */
export const stepMs = 60_000
const unitsALot = 96

/**
 * Tells what was recorded of one new unit: a unit of the demo with another serial, lot, time and recorder. One in twenty
 * was first measured again and again until it passed, and one in a hundred had a trim withdrawn.
 */
export function tellUnit(teller: Teller, rows: Rows, unitRows: UnitRows): void {
  const { random, next } = teller
  const story = random.pick(teller.stories)
  const unitId = next.unitId++
  const lotNumber = Math.floor(unitId / unitsALot)
  const lot = `F${String(lotNumber).padStart(5, '0')}`
  const serial = `${story.design}-${lot.slice(1)}-${String(unitId % unitsALot).padStart(3, '0')}`
  const designId = teller.designIds.get(story.design)!
  unitRows.lots.set(`${designId}\t${lot}`, `${designId}\t${lot}\t1\topen\t2024-01-01 00:00:00.000\n`)
  unitRows.units.push(`${unitId}\t${designId}\t${serial}\n`)
  const { tell, dayOf } = narrator(teller, rows, { unitId, serial, lot, maker: random.pick(teller.makers) })
  const first = story.records[0]!
  if (random.next() < 0.05) {
    const again = Array.from({ length: 1 + random.below(6) }, () => tell(first, null))
    if (random.next() < 0.2) tell(withdrawalOf(first.body), again.at(-1)!)
  }
  const told: Slots[] = []
  for (const record of story.records) {
    told.push(tell(record, record.follows === null ? null : told[record.follows]!))
  }
  for (const { channel, range, text } of story.states) {
    const state = text((i) => told[i]!).replace(/"day":\{[^}]*\}/, dayOf(`${channel} ${range}`))
    unitRows.unitCodes.push(`${unitId}\t${channel}\t${range}\t${state}\n`)
  }
}

type Told = { unitId: number; serial: string; lot: string; maker: Maker }

function narrator(teller: Teller, rows: Rows, { unitId, serial, lot, maker }: Told) {
  /** Measurements of a day and place, by kind. */
  const counts = new Map<string, { on: string; trim: number; verify: number }>()
  const { next } = teller
  const tell = (template: RecordTemplate, follows: Slots | null): Slots => {
    const { kind, channel, range } = template.body
    const at = teller.startMs + next.record++ * stepMs
    const slots: Slots = {
      id: idOf(at, next.record),
      number: next.number++,
      unit: serial,
      lot,
      by: maker.by,
      station: maker.station === '' ? 'null' : JSON.stringify(maker.station),
      recordedAt: new Date(at).toISOString(),
      measuredAt: new Date(at - 20_000).toISOString(),
      follows: follows?.id ?? '',
    }
    const measured = kind === 'trim' || kind === 'verify'
    const before = counts.get(`${channel} ${range}`)
    const on = slots.recordedAt.slice(0, 10)
    const day = before?.on === on ? before : { on, trim: 0, verify: 0 }
    if (measured) {
      day[kind] += 1
      counts.set(`${channel} ${range}`, day)
    }
    const attempt = measured ? day[kind] : null
    addRecord(rows, teller.signer, template, slots, { leafId: next.leafId++, unitId, attempt, maker })
    return slots
  }
  return { tell, dayOf: (place: string) => `"day":${JSON.stringify(counts.get(place))}` }
}

/** UUID version 7 of a time and a counter: sorts by time, as the server's do. */
function idOf(ms: number, counter: number): string {
  const time = ms.toString(16).padStart(12, '0')
  const count = counter.toString(16).padStart(12, '0')
  return `${time.slice(0, 8)}-${time.slice(8)}-7000-8000-${count}`
}

const withdrawals = new WeakMap<RecordBody, RecordTemplate>()
function withdrawalOf(body: RecordBody): RecordTemplate {
  const made = withdrawals.get(body) ?? templateOf(statement(body), [body])
  withdrawals.set(body, made)
  return made
}

const statement = (body: RecordBody): RecordBody => ({
  ...body,
  kind: 'withdraw',
  follows: body.id,
  reason: 'The probe was on the wrong output.',
  applied: null,
  effects: null,
  points: null,
  result: null,
  verdict: null,
  accepted: false,
})
