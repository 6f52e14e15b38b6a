import fs from 'node:fs'
import { join } from 'node:path'
import type { LedgerKey } from '../../shared/ledger/checkpoint.ts'
import { keyOf } from '../ledger/read-files.ts'
import { putDown } from './disk.ts'
import type { Spool } from './folder.ts'

/** The public key of the ledger that this spool belongs to, kept from the first time on: a later server must fit it. */
export const keyFile = (spool: Spool) => join(spool.dir, 'ogee.pub')

export function pinnedKey(spool: Spool): LedgerKey | null {
  const file = keyFile(spool)
  const text = fs.existsSync(file) ? fs.readFileSync(file, 'utf8') : null
  return text === null ? null : keyOf(text, file)
}

export function pinKey(spool: Spool, text: string): void {
  putDown(keyFile(spool), `${text.trim()}\n`, join(spool.dir, 'parts'))
}
