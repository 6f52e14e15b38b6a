import type * as z from 'zod'
import { issueWords } from '../shared/contract/issue-words.ts'
import { recordRequest } from '../shared/contract/record.ts'
import { OgeeError } from '../shared/errors.ts'
import { canonicalBytes, canonicalText, type Json } from '../shared/ledger/canonical.ts'
import { fieldErrors } from './field-errors.ts'
import { agreed, type Measured } from './measurement.ts'
import type { UnitOptions } from './unit-options.ts'

/** Body of `POST /trims`, before the server fills in what was not said. */
export type RequestBody = z.input<typeof recordRequest>

/**
 * The request of one measurement. What is not said is left out and never filled in here: the same command makes the same
 * body, and so the same idempotency key, whatever has been released or recorded since.
 */
export function requestBody(
  options: UnitOptions,
  design: string,
  measured: Measured,
  temperatureC: number | undefined,
  kind: 'trim' | 'verify' = 'trim',
): RequestBody {
  const { revision, follows, effects, measuredAt, instrument, note } = options
  const lot = agreed('lot', options.lot, measured.lot)
  const unit = agreed('unit', options.unit, measured.unit)
  const channel = agreed('channel', options.channel, measured.channel)
  if (unit === undefined) {
    throw new OgeeError('usage', 'Name the unit with --unit, or in the unit column of the points.')
  }
  const conditions = present({
    temperatureC,
    instrument: agreed('instrument', instrument, measured.instrument),
    note,
  })
  const body = present({
    kind: kind === 'trim' ? undefined : kind,
    design,
    revision,
    unit,
    lot,
    channel,
    range: measured.range,
    applied: measured.applied,
    effects,
    points: measured.points,
    conditions: Object.keys(conditions).length > 0 ? conditions : undefined,
    measuredAt,
    follows,
  })
  return checked(body)
}

function present<T extends object>(values: T): { [K in keyof T]?: Exclude<T[K], undefined> } {
  return Object.fromEntries(Object.entries(values).filter(([, value]) => value !== undefined)) as {
    [K in keyof T]?: Exclude<T[K], undefined>
  }
}

/**
 * The request of a JSON line, completed by what flags say of all of them. A line and a flag may say the same thing, never
 * different things.
 */
export function completedBody(line: Json, flags: Partial<RequestBody>): RequestBody {
  if (typeof line !== 'object' || line === null || Array.isArray(line))
    throw new OgeeError('invalid-request', 'The line is not a JSON object.')
  const said = line as Members
  const { conditions: flagged = {}, ...others } = flags
  agree(others, said, '')
  const own = said.conditions ?? {}
  // What is no object here is for the schema to refuse.
  if (typeof own !== 'object' || Array.isArray(own)) return checked({ ...flags, ...said })
  agree(flagged, own as Members, '/conditions')
  const conditions = { ...flagged, ...(own as Members) }
  return checked({ ...flags, ...said, ...(Object.keys(conditions).length > 0 ? { conditions } : {}) })
}

type Members = { readonly [name: string]: Json | undefined }

/** @throws invalid-request for the first member that flags and line say differently */
function agree(flags: object, said: Members, at: string): void {
  for (const [name, flag] of Object.entries(flags)) {
    const own = said[name]
    if (own === undefined || canonicalText(own) === canonicalText(flag as Json)) continue
    const message = `The flags say ${JSON.stringify(flag)} and the line ${JSON.stringify(own)}. Leave one of them out.`
    throw new OgeeError('invalid-request', message, { errors: [{ path: `${at}/${name}`, message }] })
  }
}

/** What flags say of every measurement, as parts of a request. */
export function flagsBody(
  options: UnitOptions,
  design: string | undefined,
  temperatureC: number | undefined,
  kind: 'trim' | 'verify' = 'trim',
): Partial<RequestBody> {
  const { revision, unit, lot, channel, range, applied, effects, measuredAt, follows } = options
  const conditions = present({ temperatureC, instrument: options.instrument, note: options.note })
  return present({
    kind: kind === 'trim' ? undefined : kind,
    design,
    revision,
    unit,
    lot,
    channel,
    range,
    applied,
    effects,
    conditions: Object.keys(conditions).length > 0 ? conditions : undefined,
    measuredAt,
    follows,
  }) as Partial<RequestBody>
}

/** The same schema as the server's, so that a slip is told before anything is sent. */
function checked(body: unknown): RequestBody {
  const result = recordRequest.safeParse(body, { error: issueWords })
  if (result.success) return body as RequestBody
  const errors = result.error.issues.flatMap(fieldErrors)
  const first = errors[0]
  throw new OgeeError('invalid-request', `The request is not right at ${first?.path}: ${first?.message}`, {
    errors,
  })
}

/** `ogee1-` and the hash of the request without `claimed`: the same measurement has the same key from any process. */
export async function defaultKey({ claimed: _, ...body }: RequestBody): Promise<string> {
  const { createHash } = await import('node:crypto')
  return `ogee1-${createHash('sha256')
    .update(canonicalBytes(body as Json))
    .digest('base64url')}`
}
