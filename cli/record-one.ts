import { verdictExit } from '../shared/contract/exit.ts'
import type { Context, Given } from './command.ts'
import type { ConnectionOptions } from './config.ts'
import { designOfLot } from './design-of-lot.ts'
import { dryRun } from './dry-run.ts'
import { readMeasurement } from './measurement.ts'
import { text } from './option-values.ts'
import { print, sayCaution } from './output.ts'
import { celsius } from './quantities.ts'
import { type AnyRecord, recordRendering } from './record-rendering.ts'
import { requestBody } from './request.ts'
import { sendTrim } from './send-trim.ts'
import { connect, readConnection } from './server-options.ts'
import type { Spooler } from './spool/spooler.ts'
import { readUnitOptions, type UnitOptions } from './unit-options.ts'

/** What `ogee trim` and `ogee check` share: one measurement from a file, recorded or tried out. */

export type OneOptions = UnitOptions & ConnectionOptions & { points: string }

export function readOne(given: Given): OneOptions {
  return {
    ...readUnitOptions(given),
    ...readConnection(given),
    points: text(given.options.points) ?? '',
  }
}

export async function recordOne(
  options: OneOptions,
  kind: 'trim' | 'verify',
  context: Context,
): Promise<number> {
  const measured = await readMeasurement(context.io, options.points, options)
  const temperatureC = options.temperature === undefined ? undefined : await celsius(options.temperature)
  const spooler = await spoolerOf(options, context)
  const client = spooler?.client ?? (await connect(options, context))
  const design = options.design ?? (await designOfLot(client, options.lot ?? ''))
  const body = requestBody(options, design, measured, temperatureC, kind)
  const record = options.dryRun
    ? await dryRun(client, body)
    : await sendTrim(spooler ?? client, body, options.key ?? measured.key)
  return await finish(record, context)
}

/** The spool that was asked for; its code is loaded for nobody else. */
export async function spoolerOf(
  options: Pick<UnitOptions, 'spool'> & ConnectionOptions,
  context: Context,
): Promise<Spooler | null> {
  if (options.spool === undefined) return null
  const { openSpooler } = await import('./spool/open-spooler.ts')
  return await openSpooler(options, options.spool, context)
}

async function finish(record: AnyRecord, context: Context): Promise<number> {
  await print(recordRendering(record), context)
  for (const { message } of record.notices) context.io.say(`ogee: ${message}`)
  if (record.result?.format === 'ogee.codes/1' && record.result.trim.codes) sayCaution(context)
  return record.verdict === null ? 0 : verdictExit[record.verdict]
}
