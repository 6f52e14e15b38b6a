import type { Finding } from '../../../shared/contract/findings.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { type Sql, sqlTime } from '../../db/sql.ts'
import type { Deps } from '../../http/deps.ts'
import { insertLeaves, newLeaf } from '../../ledger/leaves.ts'
import { readFinding } from './read-findings.ts'
import { requireSame, type Writing, writeOnce } from './written.ts'

type Asked = Writing & { finding: string; act: 'answer' | 'close' }

/**
 * Answers a finding, or closes it.
 * Guarantee: the words exist exactly when their `answer` leaf does, once for their key; a finding is closed once, and what
 * is closed takes no further answer.
 */
export function answerFinding(
  deps: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked,
): Promise<Finding> {
  const { finding, act, by } = asked
  return writeOnce(deps, asked, {
    find: () => finding,
    insert: async (sql, id, text) => {
      await lockSubject(sql, finding)
      const found = await readFinding(sql, finding)
      if (!found) throw new OgeeError('not-found', 'There is no such finding.')
      // Run again after a COMMIT whose answer was lost, and which had taken effect.
      if (found.answers.some((answer) => answer.id === id)) return
      if (found.state === 'closed') throw closed(found)
      const at = deps.now()
      const body = { format: 'ogee.answer/1', id, finding, act, text, by }
      const [leafId] = await insertLeaves(sql, [newLeaf('answer', at.toISOString(), body)])
      await sql.run('INSERT INTO finding_answers (id, finding_id, closes, by_id, at, leaf_id) VALUES ?', [
        [[id, finding, act === 'close' ? finding : null, by.id, sqlTime(at), leafId!]],
      ])
    },
    repeats: (stored, id) => {
      const answer = stored.answers.find((one) => one.id === id)
      requireSame(answer !== undefined && answer.text === asked.text.trim() && answer.act === act)
    },
  })
}

/** Findings are recorded rows, which nobody locks: what is said about one waits at the row of its unit or lot. */
async function lockSubject(sql: Sql, finding: string): Promise<void> {
  const [subject] = await sql.rows<{ unitId: number | null; design: string; lot: string | null }>(
    `SELECT r.unit_id AS unitId, f.design, f.lot FROM findings f LEFT JOIN records r ON r.id = f.record_id
      WHERE f.id = ?`,
    [finding],
  )
  if (!subject) return
  if (subject.unitId !== null) {
    await sql.rows('SELECT id FROM units WHERE id = ? FOR UPDATE', [subject.unitId])
  } else if (subject.lot !== null) {
    await sql.rows(
      `SELECT l.id FROM lots l WHERE l.design_id = (SELECT d.id FROM designs d WHERE d.design_key = ?)
        AND l.lot_key = ? FOR UPDATE`,
      [subject.design, subject.lot],
    )
  }
}

function closed({ answers }: Finding): OgeeError {
  const closing = answers.find(({ act }) => act === 'close')
  return new OgeeError(
    'finding-closed',
    `The finding was closed by ${closing?.by.name ?? 'somebody'}. What is found later is a new finding.`,
  )
}
