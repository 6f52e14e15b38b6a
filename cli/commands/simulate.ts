import { OgeeError } from '../../shared/errors.ts'
import { simulatedHeader, simulatedRows } from '../../shared/simulate/csv.ts'
import { type SimulatedMeasurement, simulateUnit } from '../../shared/simulate/unit.ts'
import type { Command, Context, Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { text, wholeNumber } from '../server-options.ts'

type Options = {
  design: string
  units: number
  seed: number
  channel: string | undefined
  range: string | undefined
}

export const simulateCommand: Command<Options> = {
  about:
    'Each unit has a gain and an offset drawn from the initial lines of the budget, a bow within the\n' +
    'INL and the noise of the plan. The same seed gives the same units on every machine, and unit 7\n' +
    'is the same unit however many are asked for. Prints a points CSV, or with ndjson a line per measurement.',
  options: [
    { flags: '--design <file>', says: 'design document', required: true, completes: 'file' },
    { flags: '--units <count>', says: 'how many units', required: true },
    { flags: '--seed <number>', says: 'where the random numbers start (default 1)' },
    { flags: '--channel <name>', says: 'this channel only' },
    { flags: '--range <id>', says: 'this range only' },
  ],
  formats: ['csv', 'ndjson'],
  examples: [
    {
      run: 'ogee simulate --design design.json --units 3 --seed 7',
      says: 'Points of three units to try things with.',
    },
  ],
  read: readSimulate,
  run: simulate,
}

function readSimulate({ options }: Given): Options {
  return {
    design: text(options.design) ?? '-',
    units: wholeNumber('--units', text(options.units) ?? '', 1, 100_000_000),
    seed: wholeNumber('--seed', text(options.seed) ?? '1', 0, Number.MAX_SAFE_INTEGER),
    channel: text(options.channel),
    range: text(options.range),
  }
}

const chunk = 64 * 1024

async function simulate(options: Options, { io, format }: Context): Promise<number> {
  const design = await readDesign(io, options.design)
  refuseUnknown('channel', options.channel, design.channels)
  refuseUnknown(
    'range',
    options.range,
    design.ranges.map(({ id }) => id),
  )
  const isCsv = format === 'csv'
  let pending = isCsv ? simulatedHeader(design.measurement.readings ?? 1) : ''
  for (let number = 0; number < options.units; number += 1) {
    for (const measurement of simulateUnit(design, options.seed, number, options)) {
      pending += isCsv ? simulatedRows(measurement) : asLine(measurement)
    }
    if (pending.length < chunk) continue
    if (!(await io.write(pending))) return 0
    pending = ''
  }
  await io.write(pending)
  return 0
}

function refuseUnknown(what: 'channel' | 'range', asked: string | undefined, known: readonly string[]): void {
  if (asked === undefined || known.includes(asked)) return
  throw new OgeeError(`${what}-unknown`, `The design has no ${what} ${asked}; it has ${known.join(', ')}.`)
}

/** The measurement as `POST /trims` takes it, save for the design. */
function asLine({ points, ...rest }: SimulatedMeasurement): string {
  const asPoints = points.map(({ code, readings }) =>
    readings.length > 1 ? { code, readings } : { code, measured: readings[0] },
  )
  return `${JSON.stringify({ ...rest, points: asPoints })}\n`
}
