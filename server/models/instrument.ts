import type { Sequelize } from 'sequelize'
import type { Instrument, InstrumentFacts } from '../../shared/contract/instruments.ts'
import { real, type Table, table, text, time, whole } from './table.ts'

/** Days are text, `YYYY-MM-DD`: no time zone has a say in them. */
export type InstrumentRow = InstrumentFacts & {
  version: number
  createdAt: Date
  changedAt: Date
  changedBy: string
  retiredAt: Date | null
}

export const instruments = (sequelize: Sequelize): Table<InstrumentRow> =>
  table<InstrumentRow>(sequelize, 'instruments', {
    id: { type: text, primaryKey: true },
    serial: text,
    title: text,
    gainPpm: real,
    offsetV: real,
    calibratedOn: text,
    dueOn: text,
    version: whole,
    createdAt: time,
    changedAt: time,
    changedBy: text,
    retiredAt: time,
  })

export const instrumentEtag = ({ version }: Pick<InstrumentRow, 'version'>) => `"${version}"`

export function factsOf(row: InstrumentFacts): InstrumentFacts {
  const { id, serial, title, gainPpm, offsetV, calibratedOn, dueOn } = row
  return { id, serial, title, gainPpm, offsetV, calibratedOn, dueOn }
}

export function instrumentReply(row: InstrumentRow): Instrument {
  return {
    ...factsOf(row),
    createdAt: row.createdAt.toISOString(),
    changedAt: row.changedAt.toISOString(),
    changedBy: row.changedBy,
    retiredAt: row.retiredAt?.toISOString() ?? null,
    etag: instrumentEtag(row),
  }
}
