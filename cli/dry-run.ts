import type { Design } from '../shared/contract/design.ts'
import { listLots } from '../shared/contract/lots.ts'
import type { Record as StoredRecord } from '../shared/contract/record.ts'
import { getTrim } from '../shared/contract/trims.ts'
import { findUnits, type Unit } from '../shared/contract/units.ts'
import { OgeeError } from '../shared/errors.ts'
import { measuredAtOf } from '../shared/measured-at.ts'
import { computeCodes } from '../shared/solver/codes.ts'
import { verifyPoints } from '../shared/solver/verify.ts'
import type { Client } from './client.ts'
import { designFrom } from './design-file.ts'
import { parseJson } from './files.ts'
import { instrumentUsed } from './instrument-used.ts'
import { learnedFrom } from './learned.ts'
import type { DryRecord } from './record-rendering.ts'
import type { RequestBody } from './request.ts'
import { fetchRevision } from './revision.ts'

/** Nothing is sent but questions. */
type Asking = Pick<Client, 'call'>
type Current = Unit['current'][number]

/**
 * What recording would give, computed here under the same revision and by the same rules; nothing is sent but questions.
 * The record that comes back has no id.
 */
export async function dryRun(client: Asking, body: RequestBody): Promise<DryRecord> {
  const number = await revisionAsked(client, body)
  const { revision, bytes } = await fetchRevision(client, body.design, number)
  const design = designFrom(parseJson(bytes.toString('utf8'), body.design), body.design)
  const channel = theOne('channel', body.channel, design.channels)
  const range = theOne(
    'range',
    body.range,
    design.ranges.map(({ id }) => id),
  )
  const current = await currentOf(client, body, channel, range)
  const before = await recordBefore(client, body, current)
  const applied = appliedBy(body, current, before)
  const { instrument, notices } = await instrumentUsed(client, body, Date.now())
  const limits = { rangeId: range, ...(instrument ? { instrument } : {}) }
  const isLearned = body.effects === 'learned' && before !== null
  const learned = isLearned ? await learnedFrom(client, before, applied, { design, range }) : undefined
  return {
    format: 'ogee.record/1',
    id: null,
    dryRun: true,
    number: null,
    kind: body.kind ?? 'trim',
    unit: body.unit,
    channel,
    range,
    lot: body.lot ?? null,
    design: body.design,
    revision: revision.number,
    designHash: revision.hash,
    pass: (before?.pass ?? 0) + (body.kind === 'verify' ? 0 : 1),
    follows: before?.id ?? null,
    applied,
    conditions: body.conditions ?? {},
    ...(body.kind === 'verify'
      ? verified(design, body, limits)
      : trimmed(design, body, { ...limits, applied, learned })),
    notices,
    station: null,
    measuredAt: measuredAtOf(body),
    recordedAt: null,
  }
}

function trimmed(design: Design, { points = [] }: RequestBody, options: Parameters<typeof computeCodes>[2]) {
  const result = computeCodes(design, points, options)
  const { verdict } = result.trim
  return { result, verdict, accepted: verdict === 'ok' || verdict === 'too-coarse' }
}

function verified(design: Design, { points = [] }: RequestBody, options: Parameters<typeof verifyPoints>[2]) {
  const result = verifyPoints(design, points, options)
  const { outcome } = result
  return { result, verdict: outcome, accepted: outcome === 'pass' || outcome === 'conditional-pass' }
}

/** Under which revision a request is computed: its lot's, else the one it names, else the released one. */
export async function revisionAsked(
  client: Asking,
  { design, lot, revision }: RequestBody,
): Promise<number | 'released'> {
  if (lot === undefined) return revision ?? 'released'
  const { items } = await client.call(listLots, { query: { design, key: lot } })
  const found = items.find(({ key }) => key === lot)
  if (found) return found.revision
  throw new OgeeError('lot-unknown', `Design ${design} has no lot ${lot}.`)
}

function theOne(what: 'channel' | 'range', asked: string | undefined, known: Design['channels']): string {
  const [only, ...others] = known
  if (asked === undefined && only !== undefined && others.length === 0) return only
  const list = known.join(', ')
  if (asked === undefined) {
    throw new OgeeError(
      `${what}-required`,
      `The design has several ${what}s: name one with --${what}: ${list}.`,
    )
  }
  if (known.includes(asked)) return asked
  throw new OgeeError(`${what}-unknown`, `The design has no ${what} ${asked}; it has ${list}.`)
}

async function currentOf(
  client: Asking,
  { unit, design }: RequestBody,
  channel: string,
  range: string,
): Promise<Current | undefined> {
  const { items } = await client.call(findUnits, { query: { serial: unit, design } })
  return items[0]?.current.find((at) => at.channel === channel && at.range === range)
}

/** Left out it means neutral, but only while no codes are loaded: what is loaded would be corrected twice. */
function appliedBy(
  { applied, unit, kind }: RequestBody,
  current: Current | undefined,
  before: StoredRecord | null,
): NonNullable<RequestBody['applied']> {
  if (applied !== undefined) return applied
  if (kind === 'verify' && before) return codesAfter(before)
  if (!current?.codes) return 'neutral'
  throw new OgeeError(
    'applied-required',
    `Unit ${unit} has codes. Say with --applied which were loaded while measuring, or neutral.`,
  )
}

function codesAfter({ result, applied }: StoredRecord): NonNullable<RequestBody['applied']> {
  return (result?.format === 'ogee.codes/1' ? result.trim.codes : null) ?? applied ?? 'neutral'
}

/** The record that this pass goes on from; a verification goes on from the last one without being told. */
async function recordBefore(
  client: Asking,
  { follows, kind }: RequestBody,
  current: Current | undefined,
): Promise<StoredRecord | null> {
  const asked = follows ?? (kind === 'verify' && current ? 'last' : undefined)
  if (asked === undefined) return null
  const id = asked === 'last' ? current?.lastRecord : asked
  if (id === undefined)
    throw new OgeeError('follows-unknown', 'There is no record of this unit, channel and range to follow.')
  return await client.call(getTrim, { params: { id } })
}
