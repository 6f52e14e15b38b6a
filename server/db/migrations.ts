import type { Sequelize } from 'sequelize'
import type { RunnableMigration } from 'umzug'
import { guards } from './migrations/001-guards.ts'
import { mutableTables } from './migrations/001-mutable.ts'
import { recordedTables } from './migrations/001-recorded.ts'
import { revisionHistory } from './migrations/002-revisions.ts'
import { lotHistory } from './migrations/003-lots.ts'
import { ledgerUpkeep } from './migrations/004-ledger.ts'
import { findingTables } from './migrations/005-findings.ts'
import { historyColumns } from './migrations/005-history.ts'
import { instrumentTables } from './migrations/006-instruments.ts'

/**
 * Every step there is, in order, by static import: a built file and a source file run the same names. Statements can run
 * again, because MariaDB commits each by itself and a process can be killed between two.
 */
export const migrations: RunnableMigration<Sequelize>[] = [
  step('001-tables', [...mutableTables, ...recordedTables, ...guards]),
  step('002-revisions', revisionHistory),
  step('003-lots', lotHistory),
  step('004-ledger', ledgerUpkeep),
  step('005-history', historyColumns),
  step('005-findings', findingTables),
  step('006-instruments', instrumentTables),
]

function step(name: string, statements: readonly string[]): RunnableMigration<Sequelize> {
  return {
    name,
    up: async ({ context }) => {
      for (const statement of statements) await context.query(statement)
    },
  }
}
