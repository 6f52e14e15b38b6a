import type { InputOf } from '../../../shared/contract/endpoint.ts'
import type { Point } from '../../../shared/contract/point.ts'
import type { postTrim } from '../../../shared/contract/trims.ts'
import type { Applied } from '../../../shared/solver/types.ts'

export type TrimBody = InputOf<typeof postTrim>['body']

export type Measured = {
  design: string
  revision: number
  unit: string
  channel: string
  range: string
  lot: string
  applied: Applied
  follows: string | null
  effects: 'design' | 'learned'
  points: readonly Point[]
  temperatureC: number | null
  note: string
  instrument: string
}

/** The body of POST /trims. Everything is said outright, `applied` above all: codes not said would be corrected twice. */
export function trimBody(measured: Measured): TrimBody {
  return { ...measurementBody(measured), kind: 'trim', effects: measured.effects }
}

/** The same points as a verification of the codes that were loaded: judged, and no codes computed. */
export const verifyBody = (measured: Measured): TrimBody => ({ ...measurementBody(measured), kind: 'verify' })

function measurementBody(measured: Measured): TrimBody {
  const { applied, follows, lot, temperatureC, instrument } = measured
  const note = measured.note.trim()
  const conditions = {
    ...(temperatureC === null ? {} : { temperatureC }),
    ...(instrument === '' ? {} : { instrument }),
    ...(note === '' ? {} : { note }),
  }
  return {
    design: measured.design,
    revision: measured.revision,
    unit: measured.unit,
    channel: measured.channel,
    range: measured.range,
    ...(lot === '' ? {} : { lot }),
    applied: applied === 'neutral' ? applied : codesOnly(applied),
    points: [...measured.points],
    ...(Object.keys(conditions).length === 0 ? {} : { conditions }),
    ...(follows === null ? {} : { follows }),
  }
}

function codesOnly({ gain, offset }: Exclude<Applied, 'neutral'>): { gain?: number; offset?: number } {
  return { ...(gain === undefined ? {} : { gain }), ...(offset === undefined ? {} : { offset }) }
}

/** An override of the record just made: it says where, which, and why. */
export function overrideBody(trim: TrimBody, follows: string, reason: string): TrimBody {
  const { design, revision, unit, channel, range } = trim
  return {
    kind: 'override',
    design,
    unit,
    ...(revision === undefined ? {} : { revision }),
    ...(channel === undefined ? {} : { channel }),
    ...(range === undefined ? {} : { range }),
    follows,
    reason,
  }
}
