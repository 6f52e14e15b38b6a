import { verdictExit } from '../../shared/contract/exit.ts'
import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { postTrim } from '../../shared/contract/trims.ts'
import { errorTable, isOgeeError, type OgeeError } from '../../shared/errors.ts'
import { problemDocument } from '../trouble.ts'
import type { Entry } from './entry.ts'
import type { Spool } from './folder.ts'
import type { SpoolClient } from './spool-client.ts'

/** What became of one entry; light, since a backlog can be long. */
export type SentLine = {
  name: string
  unit: string
  exit: number
  record: string | null
  verdict: StoredRecord['verdict']
  notices: string[]
  problem: OgeeError | null
}
/** `stopped`: why the rest still waits; null when everything was dealt with. */
export type Sending = { lines: number; notGood: number; stopped: OgeeError | null }

/**
 * Sends what is pending, in order, until something is in the way that is no entry's own fault; then the rest waits.
 * Guarantee: an entry leaves `pending/` only once the server's answer to it is on disk, and its key makes a second
 * delivery harmless; so a kill at any moment loses and doubles nothing.
 */
export async function sendPending(
  spool: Spool,
  client: Pick<SpoolClient, 'call'>,
  onLine: (line: SentLine) => Promise<void>,
  goOn: () => boolean = () => true,
): Promise<Sending> {
  const sending: Sending = { lines: 0, notGood: 0, stopped: null }
  const settled = new Set([...spool.names('sent'), ...spool.names('refused')])
  for (const name of spool.names('pending')) {
    // Its answer was on disk before a kill; only the taking away is left.
    if (settled.has(name)) spool.drop('pending', name)
    if (!goOn()) break
    const line = await sendOne(spool, client, name)
    if (line === null) continue
    if (isOgeeError(line)) {
      sending.stopped = line
      break
    }
    sending.lines += 1
    if (line.exit !== 0) sending.notGood += 1
    await onLine(line)
  }
  return sending
}

async function sendOne(
  spool: Spool,
  client: Pick<SpoolClient, 'call'>,
  name: string,
): Promise<SentLine | OgeeError | null> {
  let entry: Entry | null
  try {
    entry = spool.read('pending', name)
  } catch (error) {
    // Somebody has been at the file: it is set aside and named, and holds nothing up.
    if (!isOgeeError(error) || !isOwnFault(error)) throw error
    return refuse(spool, name, '', error)
  }
  if (entry === null) return null
  const { unit } = entry.body
  let record: StoredRecord
  try {
    record = await client.call(postTrim, { body: entry.body, idempotencyKey: entry.key })
  } catch (error) {
    if (!isOgeeError(error)) throw error
    if (!isOwnFault(error)) return error
    return refuse(spool, name, unit, error)
  }
  const { id, number, verdict, receipt } = record
  spool.move(name, 'sent', { ...entry, receipt, sent: { id, number, verdict } })
  const notices = record.notices.map(({ code }) => code)
  const exit = verdict === null ? 0 : verdictExit[verdict]
  return { name, unit, exit, record: id, verdict, notices, problem: null }
}

function refuse(spool: Spool, name: string, unit: string, problem: OgeeError): SentLine {
  spool.refuse(name, problemDocument(problem))
  return { name, unit, exit: problem.exit, record: null, verdict: null, notices: [], problem }
}

/** What is wrong with this measurement and no other: the server's word on it is final. */
const isOwnFault = ({ code }: OgeeError) => {
  const { exit, retry } = errorTable[code]
  return exit === 65 && !retry && code !== 'token-malformed'
}
