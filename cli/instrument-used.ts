import { calibrationState, overdueSentence } from '../shared/calibration.ts'
import { type Instrument, listInstruments } from '../shared/contract/instruments.ts'
import type { Notice } from '../shared/contract/record.ts'
import { OgeeError } from '../shared/errors.ts'
import { measuredAtOf } from '../shared/measured-at.ts'
import type { Client } from './client.ts'
import type { RequestBody } from './request.ts'

/** A named instrument by the server's rules, as far as they can be known here, and what the record would say of it. */
export type InstrumentUsed = { instrument: Instrument | null; notices: Notice[] }

export async function instrumentUsed(
  client: Pick<Client, 'call'>,
  body: RequestBody,
  nowMs: number,
): Promise<InstrumentUsed> {
  const id = body.conditions?.instrument
  if (id === undefined) return { instrument: null, notices: [] }
  const { items, overdueAllowed } = await client.call(listInstruments, {})
  const instrument = items.find((one) => one.id === id)
  if (!instrument) throw refusal('instrument-unknown', `There is no instrument ${id}.`)
  const measuredAt = measuredAtOf(body)
  const atMs = Math.min(measuredAt === null ? nowMs : Date.parse(measuredAt), nowMs)
  if (instrument.retiredAt !== null && atMs >= Date.parse(instrument.retiredAt)) {
    throw refusal('instrument-retired', `Instrument ${id} is retired. Name the one that measured.`)
  }
  if (calibrationState(instrument.dueOn, atMs) !== 'overdue') return { instrument, notices: [] }
  const sentence = overdueSentence(id, instrument.dueOn)
  if (!overdueAllowed) {
    throw refusal('instrument-overdue', `${sentence} Recording needs another instrument.`)
  }
  const notice: Notice = { code: 'instrument-overdue', message: `${sentence} The site allows it.` }
  return { instrument, notices: [notice] }
}

function refusal(code: 'instrument-unknown' | 'instrument-retired' | 'instrument-overdue', message: string) {
  return new OgeeError(code, message, { errors: [{ path: '/conditions/instrument', message }] })
}
