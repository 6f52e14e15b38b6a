import { proofFailsExit, someUnitsExit } from '../../../shared/contract/exit.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { usualPatience } from '../../client.ts'
import { type Command, type Context, everyFormat } from '../../command.ts'
import { type ConnectionOptions, connectionFor } from '../../config.ts'
import { print, type Rendering } from '../../output.ts'
import { readConnection, serverAbout, serverOptions } from '../../server-options.ts'
import { dropProven, type Proving } from '../../spool/drop-proven.ts'
import { Spool } from '../../spool/folder.ts'
import { type Sending, type SentLine, sendPending } from '../../spool/send-pending.ts'
import { type SpoolClient, spoolClient } from '../../spool/spool-client.ts'
import { textTable } from '../../table.ts'

type Options = ConnectionOptions & { folder: string }

/** A record is in the ledger about a second after it was received; so long what was sent is looked at again. */
const proveWithinMs = 5_000
const lookAgainMs = 500
const turnWithinMs = 30_000

export const spoolSendCommand: Command<Options> = {
  about:
    'Sends what is in pending/ in the order of writing, each exactly once whatever is killed in between, and takes away\n' +
    'from sent/ what a later checkpoint of the ledger includes, by the key kept in the folder as ogee.pub. Ends with\n' +
    `20 when some units are not good or were refused, 75 when it was cut, 16 when a receipt does not check.\n\n${serverAbout}`,
  arguments: [{ name: '<folder>', says: 'spool folder' }],
  options: serverOptions,
  formats: everyFormat,
  examples: [{ run: 'ogee spool send spool', says: 'Sends what the folder spool holds.' }],
  read: (given) => ({ ...readConnection(given), folder: given.args[0] ?? '' }),
  run: send,
}

async function send(options: Options, context: Context): Promise<number> {
  const { io } = context
  const spool = Spool.find(options.folder)
  const client = spoolClient(await connectionFor(options, io), io, usualPatience)
  spool.clear()
  const lines: SentLine[] = []
  const sending = await inTurn(spool, () =>
    sendPending(spool, client, (line) => {
      lines.push(line)
      if (io.stderrIsTerminal) io.say(`ogee: ${lines.length} sent, unit ${line.unit}`)
    }),
  )
  const proving = await prove(spool, client)
  await print(rendering(spool, lines, proving), context)
  for (const { name, record, message } of proving.faults) {
    io.say(`ogee: ${record === null ? `sent/${name}` : `record ${record}`}: ${message}`)
  }
  if (proving.stopped) {
    const kept = spool.names('sent').length
    io.say(`ogee: ${kept} in ${spool.dir}/sent could not be proven: ${proving.stopped.message}`)
  }
  return exitOf(spool, sending, proving)
}

/** Another process may be sending from the same folder: what it has under way is done in a moment. */
async function inTurn(spool: Spool, work: () => Promise<Sending>): Promise<Sending> {
  const until = performance.now() + turnWithinMs
  for (;;) {
    const done = await spool.alone(work)
    if (done) return done
    if (performance.now() > until) {
      throw new OgeeError(
        'not-ready',
        `Another process is sending from ${spool.dir}. Run this again when it is done.`,
      )
    }
    await new Promise((resolve) => setTimeout(resolve, 100))
  }
}

async function prove(spool: Spool, client: SpoolClient): Promise<Proving> {
  const until = performance.now() + proveWithinMs
  const whole = await dropProven(spool, client)
  while (whole.waiting > 0 && whole.stopped === null && performance.now() < until) {
    await new Promise((resolve) => setTimeout(resolve, lookAgainMs))
    const again = await dropProven(spool, client)
    Object.assign(whole, again, { dropped: whole.dropped + again.dropped })
  }
  return whole
}

/** Trouble goes before verdicts: a cut is 75, a token that is shut out 77. */
function exitOf(spool: Spool, sending: Sending, proving: Proving): number {
  const { stopped } = sending
  if (stopped) {
    const left = spool.names('pending').length
    const code = stopped.code === 'server-unreachable' && sending.lines > 0 ? 'answer-cut' : stopped.code
    throw new OgeeError(code, `${stopped.message} ${left} wait in ${spool.dir}/pending; nothing is lost.`, {
      errors: stopped.errors,
      facts: { ...stopped.facts, sent: sending.lines, left },
    })
  }
  if (proving.faults.length > 0) return proofFailsExit
  if (proving.stopped?.exit === 77) return 77
  return sending.notGood > 0 ? someUnitsExit : 0
}

function rendering(spool: Spool, lines: readonly SentLine[], proving: Proving): Rendering {
  const flat = lines.map(({ name, problem, ...line }) => ({
    file: name,
    ...line,
    problem: problem ? { code: problem.code, detail: problem.detail } : null,
  }))
  const left = { pending: spool.names('pending').length, sent: spool.names('sent').length }
  const cells = flat.map(({ file, unit, exit, record, verdict, problem }) => [
    file,
    unit,
    exit,
    record,
    verdict,
    problem?.detail,
  ])
  const { dropped, waiting, faults } = proving
  const stopped = proving.stopped ? { code: proving.stopped.code, detail: proving.stopped.message } : null
  const unproven = stopped ? ` Not all could be proven: ${stopped.detail}` : ''
  return {
    json: { format: 'ogee.spool-send/1', sent: flat, dropped, waiting, faults, stopped, left },
    lines: flat,
    table: () => {
      const heads = ['file', 'unit', 'exit', 'record', 'verdict', 'why not'].map((head) => ({ head }))
      const counts = `${lines.length} sent, ${dropped} proven to be in the ledger, ${left.sent} kept until they are.`
      return `${lines.length === 0 ? '' : textTable(heads, cells)}${counts}${unproven}\n`
    },
    csv: { heads: ['file', 'unit', 'exit', 'record', 'verdict', 'message'], rows: cells },
  }
}
