import { designDocument } from '../../shared/contract/design.ts'
import { codesOn } from '../../shared/solver/codes.ts'
import { prepareTrim } from '../../shared/solver/prepare-trim.ts'
import { type DemoRequest, meterGain } from './build-lot.ts'
import { demoInstrument } from './demo-instruments.ts'
import { DemoRandom } from './random.ts'
import { drawChannel, measure } from './simulated-channel.ts'

const months = 14
const dayMs = 86_400_000
const seed = 77_031

export const referenceSerial = (design: string) => `${design}-REF1`

/**
 * A reference unit: trimmed once, then read at both stations twice a month with its codes loaded. It shows what a spread from
 * unit to unit hides: that one station's meter moves.
 */
export function buildReference(design: string, document: unknown, end: Date): DemoRequest[] {
  const random = new DemoRandom(seed)
  const checked = designDocument.parse(document)
  const channel = prepareTrim(checked)
  const truth = drawChannel(random, channel, { gainPpm: 200, offsetV: 1e-5 })
  const noiseV = checked.measurement.noiseV ?? 1e-6
  const plan = checked.measurement.points
  const startMs = end.getTime() - (months * 30 + 12) * dayMs
  const read = (station: 'A' | 'B', atMs: number, loaded: Parameters<typeof measure>[3]) => {
    const age = 1 - (end.getTime() - atMs) / (726 * dayMs)
    return measure(random, channel, truth, loaded, { gain: meterGain(station, age), noiseV }, plan)
  }
  let step = 0
  const request = (station: 'A' | 'B', atMs: number, fields: object): DemoRequest => {
    const body = {
      design,
      unit: referenceSerial(design),
      channel: checked.channels[0],
      measuredAt: new Date(atMs - 20_000).toISOString(),
      conditions: { instrument: demoInstrument[station].id },
      ...fields,
    }
    step += 1
    return { key: `demo-${referenceSerial(design)}-${step}`, at: new Date(atMs), station, body }
  }
  const found = read('A', startMs, 'neutral')
  const { codes } = codesOn(channel, found, { applied: 'neutral', instrument: demoInstrument.A }).trim
  const requests = [request('A', startMs, { kind: 'trim', applied: 'neutral', points: found })]
  if (codes === null) return requests
  for (let turn = 1; turn <= 2 * months; turn++) {
    for (const station of ['A', 'B'] as const) {
      const atMs = startMs + turn * 15 * dayMs + (station === 'B' ? 3_600_000 : 0)
      requests.push(request(station, atMs, { kind: 'verify', points: read(station, atMs, codes) }))
    }
  }
  return requests
}
