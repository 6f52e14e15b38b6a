import type * as z from 'zod'
import type { Finding, postFinding } from '../../../shared/contract/findings.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { type Sql, sqlTime } from '../../db/sql.ts'
import type { Deps } from '../../http/deps.ts'
import { insertLeaves, newLeaf } from '../../ledger/leaves.ts'
import { requireSame, type Writing, writeOnce } from './written.ts'

type Subject = z.output<NonNullable<typeof postFinding.body>>['subject']
type Asked = Writing & { subject: Subject }

/**
 * Writes a finding on a record or a lot.
 * Guarantee: it exists exactly when its `finding` leaf does; once for its key, whatever is repeated or lost.
 */
export function writeFinding(
  deps: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked,
): Promise<Finding> {
  return writeOnce(deps, asked, {
    find: (id) => id,
    insert: async (sql, id, text) => {
      const { design, lot, record } = await subjectOf(sql, asked.subject)
      const at = deps.now()
      const { kind } = asked.subject
      const subject = kind === 'record' ? { kind, record } : { kind, design, lot }
      const body = { format: 'ogee.finding/1', id, subject, text, by: asked.by }
      const [leafId] = await insertLeaves(sql, [newLeaf('finding', at.toISOString(), body)])
      await sql.run('INSERT INTO findings (id, record_id, design, lot, by_id, at, leaf_id) VALUES ?', [
        [[id, record, design, lot, asked.by.id, sqlTime(at), leafId!]],
      ])
    },
    repeats: (stored) => {
      const { subject } = asked
      requireSame(
        stored.text === asked.text.trim() &&
          (subject.kind === 'record'
            ? stored.subject.kind === 'record' && stored.subject.record === subject.record
            : stored.subject.kind === 'lot' &&
              stored.subject.design === subject.design &&
              stored.subject.lot === subject.lot),
      )
    },
  })
}

type Found = { record: string | null; design: string; lot: string | null }

async function subjectOf(sql: Sql, subject: Subject): Promise<Found> {
  const [found] =
    subject.kind === 'record'
      ? await sql.rows<Found>('SELECT id AS record, design, lot FROM records WHERE id = ?', [subject.record])
      : await sql.rows<Found>(
          `SELECT NULL AS record, d.design_key AS design, l.lot_key AS lot FROM lots l
            JOIN designs d ON d.id = l.design_id WHERE d.design_key = ? AND l.lot_key = ?`,
          [subject.design, subject.lot],
        )
  if (!found) {
    const message = `There is no such ${subject.kind}, or it is not open to you.`
    throw new OgeeError('not-found', message, { errors: [{ path: '/subject', message }] })
  }
  return found
}
