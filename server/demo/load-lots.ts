import { recordRequest } from '../../shared/contract/record.ts'
import { closeLot } from '../commands/lots/close-lot.ts'
import { findLots, type LotHead } from '../commands/lots/find-lot.ts'
import { markReference } from '../commands/lots/mark-reference.ts'
import { openLot } from '../commands/lots/open-lot.ts'
import { signOffLot } from '../commands/lots/sign-off-lot.ts'
import { recordTrims } from '../commands/record-trims.ts'
import { jobOf } from '../commands/recorder.ts'
import { recordNumbers } from '../commands/recording/record-numbers.ts'
import type { Deps } from '../http/deps.ts'
import type { TokenPrincipal } from '../http/principal.ts'
import { buildLot, type DemoRequest } from './build-lot.ts'
import { buildReference, referenceSerial } from './build-reference.ts'
import { demoDesigns } from './demo-designs.ts'
import { calibrate } from './demo-instruments.ts'
import { type DemoLot, demoLots, serialsOf } from './scenario.ts'

type DemoDeps = Pick<Deps, 'database' | 'signer' | 'now' | 'notifyLedger'>
type Stations = Record<'A' | 'B', { id: string; name: string }>

type Loading = {
  deps: DemoDeps
  end: Date
  record: (requests: readonly DemoRequest[]) => Promise<void>
}

const dayMs = 86_400_000

/** Lots with all that was recorded in them, closed and signed off as the scenario says. Each step finds out whether it was done. */
export async function loadLots(deps: DemoDeps, end: Date, stations: Stations): Promise<void> {
  const record = recorderOf(deps, stations)
  const loading: Loading = { deps, end, record }
  const waiting = buildReference(demoDesigns[0].key, demoDesigns[0].document, end)
  const by = (await deps.database.models.people.findOne({ where: { role: 'engineer' } }))?.get().name ?? ''
  for (const lot of demoLots(end)) {
    await readReferences(waiting, lot.startedAt, loading)
    const { document } = demoDesigns.find((candidate) => candidate.key === lot.design)!
    for (const station of lot.shared ? (['A', 'B'] as const) : [lot.station]) {
      await calibrate(deps, station, lot.startedAt, end)
    }
    const before = await stateOf(deps, lot)
    if (before === null) await openDemoLot(deps, lot)
    if (before === null || before === 'open') await record(buildLot(lot, document))
    await finish(deps, lot, end, by)
  }
  await readReferences(waiting, end, loading)
  const [{ key }] = demoDesigns
  await markReference(deps, { design: key, unit: referenceSerial(key), reference: true, by })
}

/** What was read of the reference unit until then, one by one: each under the calibration that held at its time. */
async function readReferences(
  waiting: DemoRequest[],
  until: Date,
  { deps, end, record }: Loading,
): Promise<void> {
  for (let [next] = waiting; next && next.at < until; [next] = waiting) {
    await calibrate(deps, next.station, next.at, end)
    await record([next])
    waiting.shift()
  }
}

async function stateOf({ database }: DemoDeps, { design, key }: DemoLot): Promise<LotHead['state'] | null> {
  const [found] = await findLots(database.sql, 'd.design_key = ? AND l.lot_key = ?', [design, key])
  return found?.state ?? null
}

async function openDemoLot(deps: DemoDeps, lot: DemoLot): Promise<void> {
  const { design, key, startedAt, missing } = lot
  await openLot(
    { ...deps, now: () => startedAt },
    { design, key, revision: 1, by: 'Station script', ...(missing > 0 ? { expected: serialsOf(lot) } : {}) },
  )
}

const leftOut = 'Not right after the second pass; taken apart.'

async function finish(deps: DemoDeps, lot: DemoLot, end: Date, by: string): Promise<void> {
  const state = await stateOf(deps, lot)
  if (lot.state === 'open' || state === lot.state || state === 'signed-off') return
  const name = { design: lot.design, lot: lot.key, by }
  const at = new Date(Math.min(lot.startedAt.getTime() + dayMs, end.getTime()))
  const dated = { ...deps, now: () => at }
  if (lot.state === 'closed') await closeLot(dated, name)
  else await signOffLot(dated, { ...name, ifMatch: '*', leaveOut: [], rest: { reason: leftOut } })
}

function recorderOf(deps: DemoDeps, stations: Stations) {
  const recording = { ...deps, numbers: recordNumbers(deps.database) }
  return async (requests: readonly DemoRequest[]): Promise<void> => {
    const jobs = requests.map(({ key, at, station, body }) => ({
      ...jobOf({
        principal: stationPrincipal(stations[station]),
        request: recordRequest.parse(body),
        rawBody: body,
        key,
      }),
      at,
    }))
    for (const outcome of await recordTrims(recording, jobs)) if (!outcome.done) throw outcome.error
  }
}

function stationPrincipal(station: { id: string; name: string }): TokenPrincipal {
  const id = `demo${station.name.slice(-1)}000`
  const script = { kind: 'token', id, name: `${station.name} script`, scopes: ['trims:write'] } as const
  return { ...script, station, designs: null, expiresAt: new Date(0) }
}
