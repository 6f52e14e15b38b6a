import { type Design, designDocument } from '../../shared/contract/design.ts'
import type { Point } from '../../shared/contract/point.ts'
import { codesOn } from '../../shared/solver/codes.ts'
import { prepareTrim, type TrimChannel } from '../../shared/solver/prepare-trim.ts'
import type { Applied } from '../../shared/solver/types.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { demoInstrument } from './demo-instruments.ts'
import type { DemoRandom } from './random.ts'
import { type DemoLot, randomOfLot, serialsOf, stationOf } from './scenario.ts'
import { drawChannel, type Meter, measure } from './simulated-channel.ts'

/** A request body of the demo, when it was recorded, and a key that makes loading it twice harmless. */
export type DemoRequest = { key: string; at: Date; station: 'A' | 'B'; body: { [field: string]: unknown } }

const minuteMs = 60_000

/** Everything that was recorded while a lot was built, in order of time. */
export function buildLot(lot: DemoLot, document: unknown): DemoRequest[] {
  const random = randomOfLot(lot)
  const design = designDocument.parse(document)
  const channel = prepareTrim(design)
  const clock = { ms: lot.startedAt.getTime() }
  const requests: DemoRequest[] = []
  for (const [i, serial] of serialsOf(lot).slice(0, lot.units).entries()) {
    const station = stationOf(lot, i)
    for (const name of design.channels) {
      requests.push(...buildChannel({ lot, random, design, channel, serial, name, clock, station }))
    }
    clock.ms += random.below(20) * minuteMs
  }
  return requests
}

type Bench = {
  lot: DemoLot
  random: DemoRandom
  design: Design
  channel: TrimChannel
  serial: string
  name: string
  clock: { ms: number }
  station: 'A' | 'B'
}

function buildChannel(bench: Bench): DemoRequest[] {
  const { lot, random, design, channel, name } = bench
  const truth = drawChannel(random, channel, limitsOf(design))
  if (lot.wrongResistor) truth.gain += 0.0016
  const meter = meterOf(bench)
  const plan = design.measurement.points
  const found = spoiled(bench, measure(random, channel, truth, 'neutral', meter, plan))
  const requests = [request(bench, 'trim', 1, { applied: 'neutral', points: found })]
  const instrument = demoInstrument[bench.station]
  const asFound = codesOn(channel, found, { applied: 'neutral', instrument })
  const first = asFound.trim
  // Who cannot trim stops here; a suspect unit waits for an engineer.
  if (first.codes === null || first.verdict === 'suspect') return requests
  const verify = (step: number, loaded: Applied): boolean => {
    const left = measure(random, channel, truth, loaded, meter, plan)
    requests.push(request(bench, 'verify', step, { points: left }))
    return verifyPoints(design, left, { instrument }).outcome === 'pass'
  }
  if (name === '1' ? verify(2, first.codes) : random.next() > 0.03) return requests
  // Back for a second pass, which learns from the first what the adjusters really do.
  const second = measure(random, channel, truth, first.codes, meter, plan)
  const body = { applied: first.codes, points: second, follows: 'last', effects: 'learned' }
  requests.push(request(bench, 'trim', 3, body))
  const again = codesOn(channel, second, { applied: first.codes, learned: asFound, instrument }).trim
  if (again.codes !== null && again.verdict !== 'suspect') verify(4, again.codes)
  return requests
}

function limitsOf({ budget }: Design): { gainPpm: number; offsetV: number } {
  let gainPpm = 0
  let offsetV = 0
  for (const line of budget?.gain ?? []) if (line.when === 'initial') gainPpm += line.limitPpm
  for (const line of budget?.offset ?? []) if (line.when === 'initial') offsetV += line.limitV
  return { gainPpm: 0.7 * gainPpm, offsetV: 0.7 * offsetV }
}

/** Station B's meter drifts by 4 ppm over the two years (`age` 0 to 1); station A's holds. */
export const meterGain = (station: 'A' | 'B', age: number): number => (station === 'B' ? 4e-6 * age : 0.2e-6)

const meterOf = ({ lot, design, station }: Bench): Meter => ({
  gain: meterGain(station, lot.age),
  noiseV: design.measurement.noiseV ?? 1e-6,
})

/** Now and then a reading is taken before the output has settled. */
function spoiled({ random, channel, name }: Bench, points: Point[]): Point[] {
  if (name !== '3' || random.next() > 0.06) return points
  const { lsbV } = channel.channel.range
  return points.map((point, i) =>
    i === 2
      ? { ...point, readings: point.readings?.map((reading, j) => reading - (3 - j) * 1.5 * lsbV) }
      : point,
  ) as Point[]
}

function request(
  { lot, random, serial, name, clock, station }: Bench,
  kind: 'trim' | 'verify',
  step: number,
  fields: { [field: string]: unknown },
): DemoRequest {
  clock.ms += 2 * minuteMs + random.below(90_000)
  const measuredAt = new Date(clock.ms - 15_000 - random.below(20_000)).toISOString()
  return {
    key: `demo-${serial}-${name}-${step}`,
    at: new Date(clock.ms),
    station,
    body: {
      kind,
      design: lot.design,
      unit: serial,
      lot: lot.key,
      channel: name,
      conditions: {
        temperatureC: Math.round((22.5 + random.within(1)) * 10) / 10,
        instrument: demoInstrument[station].id,
      },
      measuredAt,
      ...fields,
    },
  }
}
