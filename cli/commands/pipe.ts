import { errorTable, OgeeError } from '../../shared/errors.ts'
import { numberedLines } from '../batch/ndjson-items.ts'
import type { Command, Context, Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { streamText } from '../files.ts'
import { keptFetch } from '../kept-fetch.ts'
import { Answerer, type Asked } from '../pipe/answer.ts'
import { celsius } from '../quantities.ts'
import { spoolerOf } from '../record-one.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../server-options.ts'
import { readUnitOptions, type UnitOptions, unitOptions } from '../unit-options.ts'

type Options = UnitOptions & ConnectionOptions

export const pipeCommand: Command<Options> = {
  about:
    'For a test program that keeps one process instead of starting one a unit. Each line of standard input is a\n' +
    'JSON object with do (trim, check or unit), an id of your own, and the fields of POST /trims (for unit: unit,\n' +
    'design, channel, range); flags complete them. Each is answered in its turn by a line with the same id, the\n' +
    'exit code that the command of that name would end with, and record, unit or problem. It ends with its input.\n' +
    `\n${serverAbout}`,
  // A key is of one measurement: a line has its own.
  options: [...unitOptions.filter(({ flags }) => !flags.startsWith('--key ')), ...serverOptions],
  formats: [],
  examples: [
    {
      run: 'ogee pipe --design DBS-A --channel 1 < questions.ndjson',
      says: 'Answers what is asked, such as {"id":1,"do":"unit","unit":"031"}, and ends.',
    },
  ],
  read: (given: Given) => ({ ...readUnitOptions(given, true), ...readConnection(given) }),
  run: pipe,
}

async function pipe(options: Options, context: Context): Promise<number> {
  const { io } = context
  const temperatureC = options.temperature === undefined ? undefined : await celsius(options.temperature)
  const spooler = await spoolerOf(options, context)
  const client = spooler?.client ?? (await connect(options, context, keptFetch()))
  const answerer = new Answerer({ client, spooler, options, temperatureC })
  const questions = questionsOf(streamText(io, '-'), answerer)
  let next = questions.next()
  for (;;) {
    const { value: asked, done } = await next
    if (done) return 0
    // The next line is read while this one is under way.
    next = questions.next()
    next.catch(() => undefined)
    const answer = await answerer.answer(asked)
    // Nobody hears the answers any more, so nothing is done for whatever else comes.
    if (!(await io.write(`${JSON.stringify(answer)}\n`))) return errorTable['answer-cut'].exit
  }
}

async function* questionsOf(pieces: AsyncIterable<string>, answerer: Answerer): AsyncGenerator<Asked> {
  for await (const lines of numberedLines(pieces)) {
    for (const { text, tooLong } of lines) {
      if (tooLong) yield { id: null, problem: new OgeeError('body-too-large', 'The line is over 1 MiB.') }
      else if (text.trim() !== '') yield answerer.read(text)
    }
  }
}
