import { errorTable, OgeeError } from '../../shared/errors.ts'
import { type Block, blocksOf } from '../batch/blocks.ts'
import { dryBlock } from '../batch/dry-block.ts'
import { type Input, itemsOf } from '../batch/items-of.ts'
import { BatchPrinter } from '../batch/print-batch.ts'
import { Progress } from '../batch/progress.ts'
import { runBlocks } from '../batch/run-blocks.ts'
import { sendBlock } from '../batch/send-block.ts'
import { summaryText, Tally } from '../batch/summary.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { designOfLot } from '../design-of-lot.ts'
import { oneOf, text, wholeNumber } from '../option-values.ts'
import { sayCaution } from '../output.ts'
import { celsius } from '../quantities.ts'
import { spoolerOf } from '../record-one.ts'
import { rememberingClient } from '../remembering-client.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../server-options.ts'
import { readUnitOptions, type UnitOptions, unitOptions } from '../unit-options.ts'

type Options = UnitOptions &
  ConnectionOptions & {
    path: string
    kind: 'trim' | 'verify'
    input: Input | undefined
    jobs: number
  }

const jobsMax = 8

export const batchCommand: Command<Options> = {
  about:
    'The points CSV has a unit column; rows next to each other with the same unit, channel and range are one\n' +
    'measurement. NDJSON has the body of POST /trims in each line, with a key if you like; flags complete it.\n' +
    'Every measurement is recorded by itself: a bad row costs its own unit only, and is named with its line.\n' +
    'Answers come in the order of the input. Ends with 20 when some units are not good, 75 when it was cut.\n' +
    'The same file again doubles nothing and goes on where it was cut; a reader that leaves (head) stops it.\n' +
    `A unit measured twice in one file needs different keys in the key column.\n\n${serverAbout}`,
  arguments: [{ name: '<file>', says: 'points CSV or NDJSON, or - for standard input' }],
  options: [
    // A key is of one measurement: those of a batch stand in its key column.
    ...unitOptions.filter(({ flags }) => !flags.startsWith('--key ')),
    {
      flags: '--kind <kind>',
      says: 'as found, or measured with the codes loaded (default: trim)',
      choices: ['trim', 'verify'],
    },
    {
      flags: '--input <format>',
      says: 'what the file holds (default: by its first character)',
      choices: ['csv', 'ndjson'],
    },
    { flags: '--jobs <number>', says: `blocks under way at a time, 1 to ${jobsMax} (default: 4)` },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee batch units.csv --design DBS-A --applied neutral --format csv > codes.csv',
      says: 'Records every unit of the file, and keeps a line with the codes of each.',
    },
    {
      run: 'ogee simulate --design design.json --units 3 | ogee batch - --design DBS-A --format ndjson',
      says: 'From standard input; one JSON object a unit.',
    },
  ],
  read: readBatch,
  run: batch,
}

function readBatch(given: Given): Options {
  const { options, args } = given
  const kind = oneOf('--kind', text(options.kind) ?? 'trim', ['trim', 'verify'])
  const read = readUnitOptions(given)
  if (kind === 'verify' && read.effects !== undefined)
    throw new OgeeError('usage', '--effects is for trims: a verification computes no codes.')
  const input = text(options.input)
  return {
    ...read,
    ...readConnection(given),
    path: args[0] ?? '',
    kind,
    input: input === undefined ? undefined : oneOf<Input>('--input', input, ['csv', 'ndjson']),
    jobs: wholeNumber('--jobs', text(options.jobs) ?? '4', 1, jobsMax),
  }
}

async function batch(options: Options, context: Context): Promise<number> {
  const { io } = context
  const temperatureC = options.temperature === undefined ? undefined : await celsius(options.temperature)
  const spooler = await spoolerOf(options, context)
  const client = spooler?.client ?? (await connect(options, context))
  const design = options.design ?? (await designOfLot(client, options.lot ?? ''))
  const asking = rememberingClient(client)
  const printer = new BatchPrinter(context)
  const tally = new Tally()
  const progress = new Progress(io, tally)
  const common = { options, design, temperatureC, kind: options.kind }
  const blocks = blocksOf(itemsOf(io, options.path, options.input, common))
  const write = async (piece: string) => piece === '' || (await io.write(piece))
  const print = async (block: Block) => {
    tally.add(block.items)
    progress.show()
    return await write(printer.head() + printer.lines(block.items))
  }
  let leftOff = false
  try {
    const send = async (block: Block) => {
      if (options.dryRun) await dryBlock(asking, block)
      else if (spooler) await (await import('../spool/spool-block.ts')).spoolBlock(spooler, block)
      else await sendBlock(client, block)
    }
    leftOff = !(await runBlocks(blocks, { width: options.jobs, send, print }))
  } catch (error) {
    await write(printer.head() + printer.foot(tally.summary))
    throw cutShort(error, tally)
  } finally {
    progress.clear()
  }
  if (leftOff) return errorTable['answer-cut'].exit
  await write(printer.head() + printer.foot(tally.summary))
  if (io.stderrIsTerminal || tally.exit !== 0) io.say(`ogee: ${summaryText(tally.summary)}`)
  if (tally.hasCodes) sayCaution(context)
  return tally.exit
}

/** Names what was not done. Once something was answered, a server that is gone has cut the batch. */
function cutShort(error: unknown, { summary, firstNotDone, lastLine }: Tally): unknown {
  if (!(error instanceof OgeeError) || summary.lines + summary.notDone === 0) return error
  const code = error.code === 'server-unreachable' && summary.lines > 0 ? 'answer-cut' : error.code
  const undone =
    firstNotDone === null
      ? `Everything up to line ${lastLine} was done.`
      : `Not done: ${summary.notDone} of the measurements in lines ${firstNotDone} to ${lastLine}.`
  return new OgeeError(code, `${error.message} ${undone} Nothing after line ${lastLine} was sent.`, {
    errors: error.errors,
    facts: { ...error.facts, done: summary.lines, notDone: summary.notDone, firstNotDone, lastLine },
    cause: error,
  })
}
