import type { Sequelize } from 'sequelize'
import type { DesignLine } from '../../shared/contract/designs.ts'
import { bytes, type Table, table, text, time, whole } from './table.ts'

export type DesignRow = { id: number; designKey: string; createdAt: Date }
export type RevisionState = 'draft' | 'in-review' | 'released' | 'withdrawn'
export type RevisionRow = {
  designId: number
  number: number
  state: RevisionState
  title: string
  documentHash: Buffer
  authorId: string | null
  author: string
  createdAt: Date
  releasedBy: string | null
  releasedAt: Date | null
  withdrawnAt: Date | null
}
export type LotRow = {
  id: number
  designId: number
  lotKey: string
  revision: number
  state: 'open' | 'closed' | 'signed-off'
  createdAt: Date
}

export const designs = (sequelize: Sequelize): Table<DesignRow> =>
  table<DesignRow>(sequelize, 'designs', {
    id: { type: whole, primaryKey: true, autoIncrement: true },
    designKey: text,
    createdAt: time,
  })

/** Without the draft's document, which only the command that reads one revision asks for. */
export const revisions = (sequelize: Sequelize): Table<RevisionRow> =>
  table<RevisionRow>(sequelize, 'revisions', {
    designId: { type: whole, primaryKey: true },
    number: { type: whole, primaryKey: true },
    state: text,
    title: text,
    documentHash: bytes,
    authorId: text,
    author: text,
    createdAt: time,
    releasedBy: text,
    releasedAt: time,
    withdrawnAt: time,
  })

export const lots = (sequelize: Sequelize): Table<LotRow> =>
  table<LotRow>(sequelize, 'lots', {
    id: { type: whole, primaryKey: true, autoIncrement: true },
    designId: whole,
    lotKey: text,
    revision: whole,
    state: text,
    createdAt: time,
  })

export function revisionReply(row: RevisionRow): DesignLine['revisions'][number] {
  return {
    number: row.number,
    state: row.state,
    title: row.title,
    author: row.author,
    createdAt: row.createdAt.toISOString(),
    releasedBy: row.releasedBy,
    releasedAt: row.releasedAt?.toISOString() ?? null,
    hash: row.documentHash.toString('hex'),
  }
}

/** `rows` are the design's revisions, lowest first. */
export function designReply(key: string, rows: readonly RevisionRow[]): DesignLine {
  const released = rows.filter((row) => row.state === 'released').at(-1)
  return {
    key,
    title: (released ?? rows.at(-1))?.title ?? key,
    released: released?.number ?? null,
    revisions: rows.map(revisionReply),
  }
}
