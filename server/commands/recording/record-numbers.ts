import type { Database } from '../../db/connection.ts'
import { transaction } from '../../db/transaction.ts'

const blockSize = 1_000

export type RecordNumbers = { take: (count: number) => Promise<number[]> }

/**
 * Numbers for people. A process reserves a block at a time, outside of any recording, so that no recording waits for a
 * counter; what a process does not use is skipped.
 */
export function recordNumbers(database: Database): RecordNumbers {
  let next = 0
  let end = 0
  let reserving: Promise<void> | undefined
  const reserve = async () => {
    const first = await transaction(database, async (sql) => {
      const [row] = await sql.rows<{ next: number }>(
        "SELECT next FROM counters WHERE name = 'record-number' FOR UPDATE",
      )
      if (!row) throw new Error('There is no counter for record numbers.')
      await sql.run("UPDATE counters SET next = next + ? WHERE name = 'record-number'", [blockSize])
      return row.next
    })
    next = first
    end = first + blockSize
  }
  return {
    take: async (count) => {
      const numbers: number[] = []
      while (numbers.length < count) {
        if (next === end) {
          reserving ??= reserve().finally(() => {
            reserving = undefined
          })
          await reserving
        } else numbers.push(next++)
      }
      return numbers
    },
  }
}
