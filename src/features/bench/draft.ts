import { readStored, writeStored } from '../../lib/storage.ts'
import { hasReadings, type Row, type RowExtra } from './grid-state.ts'
import { rememberedInstrument } from './instrument.ts'

/** Where a measurement stands. That it is on its way to the server is known to the outbox and not written twice. */
export type DraftStatus =
  | { is: 'open' }
  | {
      is: 'recorded'
      id: string
      number: number
      recordedAt: string
      accepted: boolean
      kind: 'trim' | 'verify'
    }

/** Everything typed for one measurement of one unit. The typed text, not the numbers. */
export type Draft = {
  rows: readonly Row[]
  hasU: boolean
  temperature: string
  note: string
  /** Its short name; empty: the limits of the design. */
  instrument: string
  reason: string
  /** One idempotency key a filled form: kept for the same body, made anew for another. */
  attempt: { body: string; key: string } | null
  status: DraftStatus
}

/** All but the grid, which has its own state. */
export type DraftFields = Omit<Draft, 'rows' | 'hasU'>

export type DraftPlace = {
  design: string
  revision: number
  range: string
  channel: string
  unit: string
  follows: string | null
}

const prefix = 'bench.draft.'

export const draftName = (place: DraftPlace): string =>
  prefix +
  [place.design, place.revision, place.range, place.channel, place.unit, place.follows ?? '']
    .map((part) => encodeURIComponent(part))
    .join('/')

export const newDraft = (rows: readonly Row[]): Draft => ({
  rows,
  hasU: false,
  temperature: '',
  note: '',
  instrument: rememberedInstrument(),
  reason: '',
  attempt: null,
  status: { is: 'open' },
})

export const readDraft = (name: string): Draft | null => draftFrom(readStored(name))

export const writeDraft = (name: string, draft: Draft | null): boolean => writeStored(name, draft)

export const isWorthKeeping = (draft: Draft): boolean =>
  hasReadings(draft.rows) || draft.note !== '' || draft.reason !== '' || draft.status.is !== 'open'

/** What was stored may be of an older version or cut short: anything else than a draft counts as none. */
function draftFrom(stored: unknown): Draft | null {
  if (!isObject(stored) || !Array.isArray(stored.rows) || stored.rows.length === 0) return null
  const rows = stored.rows.map((row: unknown) => ({
    code: textOf(row, 'code'),
    measured: textOf(row, 'measured'),
    u: textOf(row, 'u'),
    ...extraOf(row),
  }))
  const attempt = isObject(stored.attempt) ? stored.attempt : null
  return {
    rows,
    hasU: stored.hasU === true,
    temperature: textOf(stored, 'temperature'),
    note: textOf(stored, 'note'),
    instrument: textOf(stored, 'instrument'),
    reason: textOf(stored, 'reason'),
    attempt: attempt ? { body: textOf(attempt, 'body'), key: textOf(attempt, 'key') } : null,
    status: statusFrom(stored.status),
  }
}

function extraOf(row: unknown): { extra?: RowExtra } {
  const extra = isObject(row) && isObject(row.extra) ? row.extra : null
  if (extra === null) return {}
  const { readAt, temperatureC } = extra
  return {
    extra: {
      ...(typeof readAt === 'string' ? { readAt } : {}),
      ...(typeof temperatureC === 'number' ? { temperatureC } : {}),
    },
  }
}

function statusFrom(stored: unknown): DraftStatus {
  if (!isObject(stored)) return { is: 'open' }
  if (stored.is !== 'recorded' || typeof stored.number !== 'number') return { is: 'open' }
  return {
    is: 'recorded',
    id: textOf(stored, 'id'),
    number: stored.number,
    recordedAt: textOf(stored, 'recordedAt'),
    accepted: stored.accepted === true,
    kind: stored.kind === 'verify' ? 'verify' : 'trim',
  }
}

type Stored = { readonly [name: string]: unknown }
const isObject = (value: unknown): value is Stored => typeof value === 'object' && value !== null

function textOf(from: unknown, name: string): string {
  const value = isObject(from) ? from[name] : undefined
  return typeof value === 'string' ? value : ''
}
