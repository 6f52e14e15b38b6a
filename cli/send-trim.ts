import { postTrim } from '../shared/contract/trims.ts'
import type { Client } from './client.ts'
import type { AnyRecord } from './record-rendering.ts'
import { defaultKey, type RequestBody } from './request.ts'
import type { Spooler } from './spool/spooler.ts'

/** The one way by which a single measurement leaves: to the server, or by way of a spool. Repeated it doubles nothing. */
export async function sendTrim(
  to: Pick<Client, 'call'> | Pick<Spooler, 'record'>,
  body: RequestBody,
  key: string | undefined,
): Promise<AnyRecord> {
  if ('record' in to) return await to.record(body, key)
  return await to.call(postTrim, { body, idempotencyKey: key ?? (await defaultKey(body)) })
}
