import type { Unit } from '../../shared/contract/units.ts'
import { type AskedUnit, askUnit, type CurrentCodes, noCodesExit, unitDocument } from '../ask-unit.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { text } from '../option-values.ts'
import { print, type Rendering, sayCaution } from '../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../server-options.ts'
import { textTable } from '../table.ts'

type Options = ConnectionOptions & AskedUnit

export const unitCommand: Command<Options> = {
  about: `Ends with 12 when there are no accepted codes.\n\n${serverAbout}`,
  arguments: [{ name: '<serial>', says: 'serial of the unit' }],
  options: [
    { flags: '--design <key>', says: 'design, where units of several have that serial' },
    { flags: '--channel <name>', says: 'this channel only' },
    { flags: '--range <id>', says: 'this range only' },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    { run: 'ogee unit 031 --design DBS-A --channel 1', says: 'Codes now loaded in channel 1 of unit 031.' },
  ],
  read: readUnit,
  run: showUnit,
}

function readUnit(given: Given): Options {
  const { options, args } = given
  return {
    ...readConnection(given),
    serial: args[0] ?? '',
    design: text(options.design),
    channel: text(options.channel),
    range: text(options.range),
  }
}

async function showUnit(options: Options, context: Context): Promise<number> {
  const { serial } = options
  const { unit, current, isGood } = await askUnit(await connect(options, context), options)
  await print(rendering(unit, current), context)
  if (isGood) sayCaution(context)
  else
    context.io.say(
      `ogee: unit ${serial} has no accepted codes${current.length > 0 ? ' in every place shown' : ' there'}.`,
    )
  return isGood ? 0 : noCodesExit
}

function rendering({ design, serial }: Unit, current: readonly CurrentCodes[]): Rendering {
  const heads = [
    'unit',
    'channel',
    'range',
    'gain_code',
    'gain_word',
    'offset_code',
    'offset_word',
    'pass',
    'number',
    'record',
    'recorded_at',
  ]
  const row = (at: CurrentCodes) => [
    serial,
    at.channel,
    at.range,
    at.codes?.gain,
    at.words?.gain,
    at.codes?.offset,
    at.words?.offset,
    at.pass,
    at.number,
    at.record,
    at.recordedAt,
  ]
  return {
    json: unitDocument({ design, serial }, current),
    lines: current.map((at) => ({ design, serial, ...at })),
    table: () =>
      textTable(
        [
          'Channel',
          'Range',
          'Gain code',
          'Gain word',
          'Offset code',
          'Offset word',
          'Pass',
          'Record',
          'Recorded',
        ].map((head, i) => ({ head, right: i >= 2 && i <= 7 })),
        current.map((at) => [...row(at).slice(1, 9), at.recordedAt]),
      ),
    csv: { heads, rows: current.map(row) },
  }
}
