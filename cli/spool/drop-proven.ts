import { getLedgerKey, getProof } from '../../shared/contract/ledger.ts'
import { getMe } from '../../shared/contract/session.ts'
import { isOgeeError, type OgeeError } from '../../shared/errors.ts'
import { checkIncluded } from '../../shared/ledger/check-receipt.ts'
import type { LedgerKey } from '../../shared/ledger/checkpoint.ts'
import { crypto } from '../ledger/crypto.ts'
import { keyOf } from '../ledger/read-files.ts'
import type { Entry } from './entry.ts'
import type { Spool } from './folder.ts'
import { pinKey, pinnedKey } from './pinned-key.ts'
import { isOutage, type SpoolClient } from './spool-client.ts'

/** Proofs asked for at a time. */
const lanes = 4

/** `record` is null where its file cannot be read. */
export type Fault = { name: string; record: string | null; message: string }
/** `waiting`: sent, promised, and not yet in a checkpoint; `stopped`: why the rest was not looked at. */
export type Proving = { dropped: number; waiting: number; faults: Fault[]; stopped: OgeeError | null }

/**
 * Lets go of what was sent once it is proven to be in the ledger: the receipt is signed by the ledger's key that this
 * folder keeps, and a later checkpoint includes its leaf. Until then it stays.
 */
export async function dropProven(spool: Spool, client: Pick<SpoolClient, 'call'>): Promise<Proving> {
  const proving: Proving = { dropped: 0, waiting: 0, faults: [], stopped: null }
  const names = spool.names('sent')
  try {
    if (names.length === 0) return proving
    const key = await ledgerKey(spool, client)
    let next = 0
    const lane = async () => {
      while (next < names.length) {
        const name = names[next++]!
        const state = await lookAt(spool, client, name, key)
        if (state === 'proven') {
          spool.drop('sent', name)
          proving.dropped += 1
        } else if (state === 'waiting') proving.waiting += 1
        else if (state !== 'gone') proving.faults.push(state)
      }
    }
    await Promise.all(Array.from({ length: lanes }, lane))
  } catch (error) {
    if (!isOgeeError(error)) throw error
    if (!isOutage(error) && error.exit !== 77) throw error
    proving.stopped = error
  }
  return proving
}

async function lookAt(
  spool: Spool,
  client: Pick<SpoolClient, 'call'>,
  name: string,
  key: LedgerKey,
): Promise<'proven' | 'waiting' | 'gone' | Fault> {
  const entry = readSent(spool, name)
  if (entry === null) return 'gone'
  if ('message' in entry) return entry
  const { receipt } = entry
  if (!receipt) return { name, record: entry.sent?.id ?? null, message: 'It was sent and has no receipt.' }
  try {
    const proof = await client.call(getProof, { params: { recordId: receipt.record } })
    const checked = checkIncluded(crypto, receipt, proof, key)
    return checked.ok ? 'proven' : { name, record: receipt.record, message: checked.message }
  } catch (error) {
    const missing = {
      name,
      record: receipt.record,
      message: `The record is not in the ledger, as was promised by ${receipt.includedBy}.`,
    }
    if (isOgeeError(error, 'not-found')) return missing
    if (!isOgeeError(error, 'not-in-ledger-yet')) throw error
    // By the clock that made the promise; this computer's own may say anything.
    const { server } = await client.call(getMe, {})
    return Date.parse(server.serverTime) > Date.parse(receipt.includedBy) ? missing : 'waiting'
  }
}

/** A spoiled file is told with what the others gave: they are looked at all the same. */
function readSent(spool: Spool, name: string): Entry | Fault | null {
  try {
    return spool.read('sent', name)
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return { name, record: null, message: error.message }
  }
}

/** The key that this folder keeps, or, the first time, the server's. */
async function ledgerKey(spool: Spool, client: Pick<SpoolClient, 'call'>): Promise<LedgerKey> {
  const kept = pinnedKey(spool)
  if (kept) return kept
  const text = await client.call(getLedgerKey, {})
  const key = keyOf(text, "The server's key")
  pinKey(spool, text)
  return key
}
