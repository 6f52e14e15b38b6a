import { getRevision, type Revision } from '../shared/contract/designs.ts'
import { OgeeError } from '../shared/errors.ts'
import type { Client } from './client.ts'
import { wholeNumber } from './option-values.ts'

export const readRevision = (word: string, flag = '--revision'): number | 'released' =>
  word === 'released' ? word : wholeNumber(flag, word, 1, 1_000_000)

/** A revision and its exact bytes, whose hash has been checked. */
export async function fetchRevision(
  client: Pick<Client, 'call'>,
  key: string,
  number: number | 'released',
): Promise<{ revision: Revision; bytes: Buffer }> {
  const revision = await client.call(getRevision, { params: { key, number } })
  const bytes = Buffer.from(revision.bytes, 'base64')
  // Loaded here because it takes a tenth of the start of a command that needs no hash.
  const { createHash } = await import('node:crypto')
  if (createHash('sha256').update(bytes).digest('hex') === revision.hash) return { revision, bytes }
  throw new OgeeError(
    'defect',
    `Revision ${revision.number} of ${key} does not match its own hash. Do not use it; tell whoever keeps the server.`,
  )
}
