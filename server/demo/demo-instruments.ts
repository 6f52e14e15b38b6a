import { changeInstrument } from '../commands/instruments/change-instrument.ts'
import { createInstrument } from '../commands/instruments/create-instrument.ts'
import type { Deps } from '../http/deps.ts'

const dayMs = 86_400_000
const yearDays = 365

/** Each station has one meter. `dueInDays`: how long after the demo begins its last calibration ends. */
export const demoInstrument = {
  A: { id: 'DMM-07', serial: 'QX-20417', gainPpm: 0.5, offsetV: 1e-6, dueInDays: 214 },
  B: { id: 'DMM-12', serial: 'QX-20688', gainPpm: 0.5, offsetV: 1e-6, dueInDays: 12 },
} as const

/**
 * Brings a station's meter to the calibration that held at some time of the two years; each ends the day on which the
 * next is done. Guarantee: the same again changes nothing.
 */
export async function calibrate(
  deps: Pick<Deps, 'database' | 'now'>,
  station: 'A' | 'B',
  at: Date,
  end: Date,
): Promise<void> {
  const { id, serial, gainPpm, offsetV, dueInDays } = demoInstrument[station]
  const lastMs = end.getTime() + dueInDays * dayMs
  const before = Math.floor((lastMs - at.getTime()) / (yearDays * dayMs))
  const dueMs = lastMs - before * yearDays * dayMs
  const day = (ms: number) => new Date(ms).toISOString().slice(0, 10)
  const dates = { calibratedOn: day(dueMs - yearDays * dayMs), dueOn: day(dueMs) }
  const title = 'Reference voltmeter, 8½ digits'
  if (await deps.database.models.instruments.findByPk(id)) {
    await changeInstrument(deps, { id, change: dates, by: 'demo data', ifMatch: '*' })
  } else {
    await createInstrument(deps, { id, serial, title, gainPpm, offsetV, ...dates }, 'demo data')
  }
}
