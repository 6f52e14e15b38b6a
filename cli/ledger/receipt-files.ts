import { readdir } from 'node:fs/promises'
import { join } from 'node:path'
import { type Receipt, receipt as receiptSchema } from '../../shared/contract/receipt.ts'
import { OgeeError } from '../../shared/errors.ts'
import { parseJson, readFileText } from '../files.ts'

export type FoundReceipt = { file: string; receipt: Receipt }

const fileMaxBytes = 16 * 1024 * 1024

/** Every receipt in the JSON files of `sent/` of a spool folder, or of the folder itself when it has no `sent/`. */
export async function findReceipts(folder: string): Promise<FoundReceipt[]> {
  const sent = join(folder, 'sent')
  const from = (await namesIn(sent)) === null ? folder : sent
  const names = await namesIn(from)
  if (names === null) throw new OgeeError('input-missing', `There is no folder ${folder}.`)
  const found: FoundReceipt[] = []
  for (const name of names.filter((one) => one.endsWith('.json')).sort(byName)) {
    const file = join(from, name)
    const tooLarge = () => new OgeeError('invalid-document', `${file} is over 16 MiB.`)
    const receipt = receiptIn(parseJson((await readFileText(file, fileMaxBytes, tooLarge)).text, file))
    if (receipt) found.push({ file, receipt })
  }
  return found
}

/** A receipt that stands alone, in a record, or in what a spool keeps of one. */
export function receiptIn(value: unknown): Receipt | null {
  const parsed = receiptSchema.safeParse(value)
  if (parsed.success) return parsed.data
  if (typeof value !== 'object' || value === null) return null
  const { receipt, record } = value as { receipt?: unknown; record?: unknown }
  return receiptIn(receipt ?? null) ?? receiptIn(record ?? null)
}

async function namesIn(folder: string): Promise<string[] | null> {
  try {
    return await readdir(folder)
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code
    if (code === 'ENOENT' || code === 'ENOTDIR') return null
    throw new OgeeError('read-failed', `${folder} cannot be read: ${code ?? 'unknown'}.`)
  }
}

const byName = (a: string, b: string) => (a < b ? -1 : 1)
