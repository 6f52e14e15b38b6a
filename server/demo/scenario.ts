import { DemoRandom } from './random.ts'

/** When and what the demo's maker built: forty lots over two years. Everything follows from the seed and the end date. */

export type DemoLot = {
  design: 'DBS-A' | 'DBC-16'
  key: string
  startedAt: Date
  station: 'A' | 'B'
  /** Both stations took turns. */
  shared: boolean
  units: number
  /** Serials that were expected beside those that were built. */
  missing: number
  state: 'open' | 'closed' | 'signed-off'
  /** A resistor of the wrong value: the gain lies beyond what the adjuster reaches. */
  wrongResistor: boolean
  /** 0 at the beginning of the two years, 1 at their end. */
  age: number
}

const seed = 20_260_411
const lotCount = 40
const days = 720
const dayMs = 86_400_000
const wrongLot = 27

export function demoLots(end: Date): DemoLot[] {
  const random = new DemoRandom(seed)
  return Array.from({ length: lotCount }, (_, i) => {
    const age = i / (lotCount - 1)
    const day = Math.round(age * days + random.within(4))
    const startedAt = new Date(end.getTime() - (days + 6 - day) * dayMs)
    startedAt.setUTCHours(7 + random.below(3), random.below(60), random.below(60), random.below(1_000))
    const design = i % 3 === 2 ? 'DBC-16' : 'DBS-A'
    return {
      design,
      key: `L${String(i + 1).padStart(3, '0')}`,
      startedAt,
      station: i % 5 < 3 ? 'A' : 'B',
      shared: i === lotCount - 1,
      units: i === lotCount - 1 ? 24 : i === wrongLot ? 6 : 2,
      missing: i === lotCount - 1 ? 2 : 0,
      // The newest is under way; the one before, and the one with the wrong resistor, wait for an engineer.
      state: i === lotCount - 1 ? 'open' : i === lotCount - 2 || i === wrongLot ? 'closed' : 'signed-off',
      wrongResistor: i === wrongLot,
      age,
    }
  })
}

/** Serials of a lot, those that were expected and never came last. */
export const serialsOf = ({ design, key, units, missing }: DemoLot): string[] =>
  Array.from(
    { length: units + missing },
    (_, i) => `${design}-${key.slice(1)}${String(i + 1).padStart(2, '0')}`,
  )

/** The station at which unit `i` of a lot was trimmed. */
export const stationOf = ({ station, shared }: DemoLot, i: number): 'A' | 'B' =>
  shared && i % 2 === 1 ? (station === 'A' ? 'B' : 'A') : station

export const randomOfLot = (lot: DemoLot) => new DemoRandom(seed ^ (Number(lot.key.slice(1)) * 7_919))
