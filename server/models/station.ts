import type { Sequelize } from 'sequelize'
import type { Station } from '../../shared/contract/stations.ts'
import { type Table, table, text, time } from './table.ts'

export type StationRow = { id: string; name: string; createdAt: Date; retiredAt: Date | null }

export const stations = (sequelize: Sequelize): Table<StationRow> =>
  table<StationRow>(sequelize, 'stations', {
    id: { type: text, primaryKey: true },
    name: text,
    createdAt: time,
    retiredAt: time,
  })

export function stationReply(row: StationRow): Station {
  return {
    id: row.id,
    name: row.name,
    createdAt: row.createdAt.toISOString(),
    retiredAt: row.retiredAt?.toISOString() ?? null,
  }
}
