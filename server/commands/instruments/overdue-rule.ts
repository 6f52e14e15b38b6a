import type { Sql } from '../../db/sql.ts'

/** The site's rule for overdue instruments. Nothing set means that they are refused. */
const name = 'instruments-overdue'

export async function overdueAllowed(sql: Sql): Promise<boolean> {
  const [row] = await sql.rows<{ value: string }>('SELECT value FROM settings WHERE name = ?', [name])
  return row?.value === 'allowed'
}

export async function setOverdueAllowed(sql: Sql, allowed: boolean): Promise<void> {
  await sql.run('INSERT INTO settings (name, value) VALUES ? ON DUPLICATE KEY UPDATE value = VALUES(value)', [
    [[name, allowed ? 'allowed' : 'refused']],
  ])
}
