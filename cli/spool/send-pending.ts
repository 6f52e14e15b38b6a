import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { type ErrorCode, errorTable, isOgeeError, OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import type { Block } from '../batch/blocks.ts'
import type { Problem } from '../batch/item.ts'
import { sendBlock } from '../batch/send-block.ts'
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
  problem: Problem | null
}
/** `stopped`: why the rest still waits; null when everything was dealt with. */
export type Sending = { lines: number; notGood: number; stopped: OgeeError | null }

/** So many go in one request, and are made durable together: after a kill at most these are sent again. */
const together = 100
const charactersMax = limits.batchMaxBytes / 4
const tries = 3

type Row = Block['rows'][number]
type Waiting = { name: string; entry: Entry; row: Row }

/**
 * Sends what is pending, in order, until something is in the way that is no entry's own fault; then the rest waits.
 * Guarantee: an entry leaves `pending/` only once the server's answer to it is on disk, and its key makes a second
 * delivery harmless; so a kill at any moment loses and doubles nothing.
 */
export async function sendPending(
  spool: Spool,
  client: Pick<SpoolClient, 'sendBlock'>,
  onLine: (line: SentLine) => void,
  goOn: () => boolean = () => true,
): Promise<Sending> {
  const sending: Sending = { lines: 0, notGood: 0, stopped: null }
  const say = (line: SentLine) => {
    sending.lines += 1
    if (line.exit !== 0) sending.notGood += 1
    onLine(line)
  }
  const names = spool.names('pending')
  const settled = new Set([...spool.names('sent'), ...spool.names('refused')])
  for (let next = 0; next < names.length && sending.stopped === null && goOn(); ) {
    const waiting: Waiting[] = []
    for (let size = 0; next < names.length && waiting.length < together && size < charactersMax; next++) {
      const name = names[next]!
      // Its answer was on disk before a kill; only the taking away is left.
      if (settled.has(name)) spool.drop('pending', name)
      const one = readWaiting(spool, name, say)
      if (one === null) continue
      waiting.push(one)
      size += one.row.send.text.length
    }
    sending.stopped = await sendTogether(spool, client, waiting, say)
  }
  return sending
}

function readWaiting(spool: Spool, name: string, say: (line: SentLine) => void): Waiting | null {
  try {
    const entry = spool.read('pending', name)
    if (entry === null) return null
    const { body, key } = entry
    const send = { body, key, text: JSON.stringify({ key, ...body }) }
    return { name, entry, row: { line: 0, unit: body.unit, channel: null, range: null, send, outcome: null } }
  } catch (error) {
    // Somebody has been at the file: it is set aside and named, and holds nothing up.
    if (!isOgeeError(error) || error.exit !== 65) throw error
    say(refuse(spool, name, '', problemDocument(error) as Problem))
    return null
  }
}

async function sendTogether(
  spool: Spool,
  client: Pick<SpoolClient, 'sendBlock'>,
  waiting: readonly Waiting[],
  say: (line: SentLine) => void,
): Promise<OgeeError | null> {
  let stopped: OgeeError | null = null
  const rows = waiting.map(({ row }) => row)
  try {
    await sendBlock(client, { items: rows, rows, places: new Set() }, tries)
  } catch (error) {
    if (!isOgeeError(error)) throw error
    stopped = error
  }
  const sent: { name: string; entry: Entry }[] = []
  const lines: SentLine[] = []
  for (const { name, entry, row } of waiting) {
    const { outcome } = row
    const { unit } = entry.body
    if (outcome === null) continue
    if ('problem' in outcome) {
      const { problem, exit } = outcome
      // What is wrong with this measurement and no other; anything else would befall the rest as well.
      if (exit === 65) lines.push(refuse(spool, name, unit, problem))
      else stopped ??= troubleOf(problem)
      continue
    }
    const { id, number, verdict, receipt, notices } = outcome.record as StoredRecord
    sent.push({ name, entry: { ...entry, receipt, sent: { id, number, verdict } } })
    const codes = notices.map(({ code }) => code)
    lines.push({ name, unit, exit: outcome.exit, record: id, verdict, notices: codes, problem: null })
  }
  if (sent.length > 0) spool.sent(sent)
  for (const line of lines) say(line)
  return stopped
}

function refuse(spool: Spool, name: string, unit: string, problem: Problem): SentLine {
  spool.refuse(name, problem)
  return { name, unit, exit: 65, record: null, verdict: null, notices: [], problem }
}

const troubleOf = ({ code, detail }: Problem) =>
  new OgeeError(code in errorTable ? (code as ErrorCode) : 'defect', detail)
