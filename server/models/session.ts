import type { Sequelize } from 'sequelize'
import { longText, type Table, table, text, time } from './table.ts'

export type SessionRow = { sid: string; expires: Date; data: string }

/** The layout that connect-session-sequelize expects. */
export const sessions = (sequelize: Sequelize): Table<SessionRow> =>
  table<SessionRow>(sequelize, 'sessions', {
    sid: { type: text, primaryKey: true },
    expires: time,
    data: longText,
  })
