import { OgeeError } from '../../../shared/errors.ts'
import type { Sql } from '../../db/sql.ts'
import { type Catalogue, designOf, loadDesigns, type RevisionInPlay, readCatalogue } from './catalogue.ts'
import type { Context, Decision } from './context.ts'
import { decideMeasurement } from './decide-measurement.ts'
import { decideOverride, decideWithdrawal } from './decide-statement.ts'
import { type Known, readBefore, readFollowed } from './followed.ts'
import { type Instruments, readInstruments, usedInstrument } from './instrument.ts'
import type { Job } from './job.ts'
import { requireUsableRevision } from './notices.ts'
import { type Place, Places } from './place.ts'
import { resolvePlace, resolveRevision } from './resolve.ts'
import { type LockedUnit, lockUnits, unitKey } from './units.ts'

type Assigned = { ids: readonly string[]; numbers: readonly number[]; at: Date }
type Decided = { decisions: Decision[]; refusals: Map<Job, Error>; places: Places }
type Resolved = { job: Job; revision: RevisionInPlay; i: number }

/** Decides requests one after another under the locks of their units; a later one sees what an earlier one did. */
export async function decideAll(sql: Sql, jobs: readonly Job[], assigned: Assigned): Promise<Decided> {
  const refusals = new Map<Job, Error>()
  const catalogue = await readCatalogue(
    sql,
    jobs.map((job) => job.request.design),
    jobs.flatMap((job) => job.request.lot ?? []),
  )
  const resolved = resolveAll(jobs, catalogue, refusals)
  await loadDesigns(
    sql,
    resolved.map(({ revision }) => revision.hash),
  )
  const units = await lockUnits(
    sql,
    resolved.map(({ job, revision }) => ({ designId: revision.designId, serial: job.request.unit })),
  )
  const places = await Places.read(
    sql,
    [...units.values()].filter((unit) => !unit.fresh).map((unit) => unit.id),
  )
  const known = await readFollowed(sql, idsToRead(resolved, units, places))
  if (jobs.some((job) => job.request.effects === 'learned')) await readBefore(sql, known)
  const instruments = await readInstruments(
    sql,
    jobs.flatMap((job) => job.request.conditions?.instrument ?? []),
  )
  const decisions: Decision[] = []
  for (const one of resolved) {
    try {
      const decision = await decide(sql, one, { units, places, known, instruments, assigned })
      places.put(decision.context.place, decision.state)
      note(known, decision)
      decisions.push(decision)
    } catch (error) {
      // Only refusals belong to one request; anything else is trouble of the whole.
      if (!(error instanceof OgeeError)) throw error
      refusals.set(one.job, error)
    }
  }
  return { decisions, refusals, places }
}

function resolveAll(jobs: readonly Job[], catalogue: Catalogue, refusals: Map<Job, Error>): Resolved[] {
  return jobs.flatMap((job, i) => {
    try {
      return { job, revision: resolveRevision(catalogue, job.request), i }
    } catch (error) {
      if (!(error instanceof OgeeError)) throw error
      refusals.set(job, error)
      return []
    }
  })
}

/** Records that decisions may look at: those named, and those that `last` may mean. */
function idsToRead(
  resolved: readonly Resolved[],
  units: ReadonlyMap<string, LockedUnit>,
  places: Places,
): string[] {
  return resolved.flatMap(({ job, revision }) => {
    const { follows, kind, unit } = job.request
    if (follows === undefined && kind === 'trim') return []
    if (follows !== undefined && follows !== 'last') return follows
    const locked = units.get(unitKey({ designId: revision.designId, serial: unit }))
    return locked ? places.measurementsOf(locked.id) : []
  })
}

type World = {
  units: ReadonlyMap<string, LockedUnit>
  places: Places
  known: Known
  instruments: Instruments
  assigned: Assigned
}

async function decide(sql: Sql, { job, revision, i }: Resolved, world: World): Promise<Decision> {
  const { request } = job
  const unit = world.units.get(unitKey({ designId: revision.designId, serial: request.unit }))
  if (!unit) throw new Error(`Unit ${request.unit} was not locked.`)
  const place = { unitId: unit.id, ...placeOf(job, revision, world.known) }
  const state = world.places.at(place)
  const recordedAt = (job.at ?? world.assigned.at).toISOString()
  const context: Context = {
    job,
    id: world.assigned.ids[i]!,
    number: world.assigned.numbers[i]!,
    recordedAt,
    revision,
    unit,
    place,
    state,
    known: world.known,
    instrument: usedInstrument(world.instruments, request, recordedAt),
  }
  if (request.kind === 'override') return decideOverride(context)
  if (request.kind === 'withdraw') return decideWithdrawal(sql, context)
  requireUsableRevision(context)
  return decideMeasurement(context)
}

/** What is said about a record is said about its channel and range; a measurement names its own. */
function placeOf(job: Job, revision: RevisionInPlay, known: Known): Omit<Place, 'unitId'> {
  const { follows, kind, channel, range } = job.request
  const meant = kind === 'trim' || kind === 'verify' || !follows ? undefined : known.get(follows)
  return resolvePlace(designOf(revision.hash), {
    channel: channel ?? meant?.body.channel,
    range: range ?? meant?.body.range,
  })
}

function note(known: Known, { body, context }: Decision): void {
  known.set(body.id, { body, unitId: context.unit.id, overridden: false, withdrawn: false })
  const meant = body.follows === null ? undefined : known.get(body.follows)
  if (meant && body.kind === 'override') meant.overridden = true
  if (meant && body.kind === 'withdraw') meant.withdrawn = true
}
