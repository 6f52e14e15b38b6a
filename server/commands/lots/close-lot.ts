import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { type LotHead, type LotName, lockLot } from './find-lot.ts'
import { wrongState } from './lot-rules.ts'

/**
 * Closes a lot.
 * Guarantee: no record that names the lot is stored after this; closing a closed one changes nothing.
 */
export async function closeLot(
  { database, now }: Pick<Deps, 'database' | 'now'>,
  asked: LotName & { by: string },
): Promise<LotHead> {
  return transaction(database, async (sql) => {
    const lot = await lockLot(sql, asked)
    if (lot.state === 'closed') return lot
    if (lot.state === 'signed-off')
      throw wrongState(`Lot ${lot.key} is signed off, which closed it.`, lot.state)
    await sql.run("UPDATE lots SET state = 'closed', closed_by = ?, closed_at = ? WHERE id = ?", [
      asked.by,
      sqlTime(now()),
      lot.id,
    ])
    return lockLot(sql, asked)
  })
}
