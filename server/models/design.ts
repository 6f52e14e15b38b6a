import type { Sequelize } from 'sequelize'
import type { DesignLine, RevisionLine } from '../../shared/contract/designs.ts'
import { bytes, flag, longText, type Table, table, text, time, whole } from './table.ts'

export type DesignRow = {
  id: number
  designKey: string
  createdAt: Date
  copiedFrom: string | null
  copiedRevision: number | null
}
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
  /** Goes up with every change of the row. */
  version: number
  basedOn: number | null
  /** JSON: everybody who saved it, its author first; null for one that was made before that was kept. */
  writers: string | null
  savedBy: string | null
  savedAt: Date | null
  submittedBy: string | null
  submittedAt: Date | null
  returnedBy: string | null
  returnedAt: Date | null
  returnReason: string | null
  releasedBy: string | null
  releasedAt: Date | null
  releasedByAuthor: boolean
  withdrawnBy: string | null
  withdrawnAt: Date | null
  withdrawReason: string | null
}
export type LotRow = {
  id: number
  designId: number
  lotKey: string
  revision: number
  state: 'open' | 'closed' | 'signed-off'
  createdAt: Date
  openedBy: string | null
  closedBy: string | null
  closedAt: Date | null
}

export const designs = (sequelize: Sequelize): Table<DesignRow> =>
  table<DesignRow>(sequelize, 'designs', {
    id: { type: whole, primaryKey: true, autoIncrement: true },
    designKey: text,
    createdAt: time,
    copiedFrom: text,
    copiedRevision: whole,
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
    version: whole,
    basedOn: whole,
    writers: longText,
    savedBy: text,
    savedAt: time,
    submittedBy: text,
    submittedAt: time,
    returnedBy: text,
    returnedAt: time,
    returnReason: longText,
    releasedBy: text,
    releasedAt: time,
    releasedByAuthor: flag,
    withdrawnBy: text,
    withdrawnAt: time,
    withdrawReason: longText,
  })

export const lots = (sequelize: Sequelize): Table<LotRow> =>
  table<LotRow>(sequelize, 'lots', {
    id: { type: whole, primaryKey: true, autoIncrement: true },
    designId: whole,
    lotKey: text,
    revision: whole,
    state: text,
    createdAt: time,
    openedBy: text,
    closedBy: text,
    closedAt: time,
  })

/** What `If-Match` takes: no two states of a design's revisions share it. */
export const etagOf = ({ number, version }: Pick<RevisionRow, 'number' | 'version'>) =>
  `"${number}.${version}"`

export type Writer = { kind: 'person' | 'token'; id: string; name: string }

export function writersOf(row: Pick<RevisionRow, 'writers' | 'authorId' | 'author'>): Writer[] {
  if (row.writers !== null) return JSON.parse(row.writers) as Writer[]
  return row.authorId === null ? [] : [{ kind: 'person', id: row.authorId, name: row.author }]
}

const isoOf = (time: Date | null) => time?.toISOString() ?? null

export function revisionReply(row: RevisionRow): RevisionLine {
  return {
    number: row.number,
    state: row.state,
    title: row.title,
    author: row.author,
    createdAt: row.createdAt.toISOString(),
    basedOn: row.basedOn,
    writers: writersOf(row),
    savedBy: row.savedBy ?? row.author,
    savedAt: (row.savedAt ?? row.createdAt).toISOString(),
    submittedBy: row.submittedBy,
    submittedAt: isoOf(row.submittedAt),
    returnedBy: row.returnedBy,
    returnedAt: isoOf(row.returnedAt),
    returnReason: row.returnReason,
    releasedBy: row.releasedBy,
    releasedAt: isoOf(row.releasedAt),
    releasedByAuthor: Boolean(row.releasedByAuthor),
    withdrawnBy: row.withdrawnBy,
    withdrawnAt: isoOf(row.withdrawnAt),
    withdrawReason: row.withdrawReason,
    hash: row.documentHash.toString('hex'),
    etag: etagOf(row),
  }
}

/** `rows` are the design's revisions, lowest first. */
export function designReply(
  design: Pick<DesignRow, 'designKey' | 'copiedFrom' | 'copiedRevision'>,
  rows: readonly RevisionRow[],
): DesignLine {
  const released = rows.filter((row) => row.state === 'released').at(-1)
  const { designKey: key, copiedFrom, copiedRevision } = design
  return {
    key,
    title: (released ?? rows.at(-1))?.title ?? key,
    released: released?.number ?? null,
    copiedFrom:
      copiedFrom === null || copiedRevision === null
        ? null
        : { design: copiedFrom, revision: copiedRevision },
    revisions: rows.map(revisionReply),
  }
}
