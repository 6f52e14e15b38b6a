import { verdictExit } from '../../shared/contract/exit.ts'
import { postTrim } from '../../shared/contract/trims.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { designOfLot } from '../design-of-lot.ts'
import { dryRun } from '../dry-run.ts'
import { readMeasurement } from '../measurement.ts'
import { pointsAbout, pointsOption } from '../measurement-options.ts'
import { print, sayCaution } from '../output.ts'
import { celsius } from '../quantities.ts'
import { type AnyRecord, recordRendering } from '../record-rendering.ts'
import { defaultKey, requestBody } from '../request.ts'
import { connect, readConnection, serverAbout, serverOptions, text } from '../server-options.ts'
import { openSpooler } from '../spool/open-spooler.ts'
import { readUnitOptions, type UnitOptions, unitOptions } from '../unit-options.ts'

type Options = UnitOptions & ConnectionOptions & { points: string }

export const trimCommand: Command<Options> = {
  about:
    'The same command again doubles nothing: the answer then carries the notice replayed. To record\n' +
    `an identical measurement once more give --measured-at or --key.\n${pointsAbout}\n\n${serverAbout}`,
  options: [...unitOptions, pointsOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee trim --design DBS-A --unit 031 --channel 1 --applied neutral --points points.csv',
      says: 'Records the points of unit 031 and prints the record with its codes.',
    },
    {
      run: 'ogee trim --design DBS-A --unit 031 --channel 1 --applied neutral --points points.csv --dry-run',
      says: 'The same numbers; nothing is recorded.',
    },
  ],
  read: (given: Given) => ({
    ...readUnitOptions(given),
    ...readConnection(given),
    points: text(given.options.points) ?? '',
  }),
  run: trim,
}

async function trim(options: Options, context: Context): Promise<number> {
  const measured = await readMeasurement(context.io, options.points, options)
  const temperatureC = options.temperature === undefined ? undefined : await celsius(options.temperature)
  const spooler = options.spool === undefined ? null : await openSpooler(options, options.spool, context)
  const client = spooler?.client ?? (await connect(options, context))
  const design = options.design ?? (await designOfLot(client, options.lot ?? ''))
  const body = requestBody(options, design, measured, temperatureC)
  if (spooler) return await finish(await spooler.record(body, options.key ?? measured.key), context)
  if (options.dryRun) return await finish(await dryRun(client, body), context)
  const idempotencyKey = options.key ?? measured.key ?? (await defaultKey(body))
  return await finish(await client.call(postTrim, { body, idempotencyKey }), context)
}

async function finish(record: AnyRecord, context: Context): Promise<number> {
  await print(recordRendering(record), context)
  for (const { message } of record.notices) context.io.say(`ogee: ${message}`)
  if (record.result?.format === 'ogee.codes/1' && record.result.trim.codes) sayCaution(context)
  return record.verdict === null ? 0 : verdictExit[record.verdict]
}
