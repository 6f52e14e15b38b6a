import { OgeeError } from '../../shared/errors.ts'
import { needsArithmetic, parseQuantity } from '../../shared/quantity/parse.ts'
import { simulatedHeader, simulatedRows } from '../../shared/simulate/csv.ts'
import { type SimulatedMeasurement, simulateUnit, unitsMost } from '../../shared/simulate/unit.ts'
import { type Applied, readApplied } from '../applied.ts'
import type { Command, Context, Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { text, wholeNumber } from '../option-values.ts'
import { readCodes } from '../simulated-codes.ts'

type Options = {
  design: string
  units: number
  seed: number
  channel: string | undefined
  range: string | undefined
  applied: Applied
  /** What `ogee batch --format csv` printed. */
  codes: string | undefined
  unsettled: number
  instrument: string | undefined
}

export const simulateCommand: Command<Options> = {
  about:
    'Each unit has a gain and an offset drawn from the initial lines of the budget, a bow within the\n' +
    'INL, adjusters that are off within their effect tolerance, and the noise of the plan. The same seed\n' +
    'gives the same units on every machine, and unit 7 is the same unit however many are asked for.\n' +
    'With --codes (what ogee batch printed as CSV) or --applied the same units are measured again with\n' +
    'those codes loaded; units without codes are left out. Prints a points CSV, or NDJSON for ogee batch.',
  options: [
    { flags: '--design <file>', says: 'design document', required: true, completes: 'file' },
    { flags: '--units <count>', says: 'how many units', required: true },
    { flags: '--seed <number>', says: 'where the random numbers start (default 1)' },
    { flags: '--channel <name>', says: 'this channel only' },
    { flags: '--range <id>', says: 'this range only' },
    { flags: '--applied <codes>', says: 'codes loaded in every unit: neutral (default), or gain=K,offset=K' },
    {
      flags: '--codes <file>',
      says: 'codes loaded in each unit: CSV with unit, channel, range, gain_code, offset_code',
      completes: 'file',
    },
    { flags: '--unsettled <share>', says: 'share of measurements with a point read too early, such as 5 %' },
    { flags: '--instrument <id>', says: 'instrument that is said to have measured' },
  ],
  formats: ['csv', 'ndjson'],
  examples: [
    {
      run: 'ogee simulate --design design.json --units 3 --seed 7',
      says: 'Points of three units to try things with.',
    },
    {
      run: 'ogee simulate --design design.json --units 3 --seed 7 --applied gain=2593,offset=2048',
      says: 'The same three units with those codes loaded.',
    },
  ],
  read: readSimulate,
  run: simulate,
}

function readSimulate({ options }: Given): Options {
  return {
    design: text(options.design) ?? '-',
    units: wholeNumber('--units', text(options.units) ?? '', 1, unitsMost),
    seed: wholeNumber('--seed', text(options.seed) ?? '1', 0, Number.MAX_SAFE_INTEGER),
    channel: text(options.channel),
    range: text(options.range),
    applied: readApplied(text(options.applied) ?? 'neutral'),
    codes: oneOfTwo(text(options.codes), text(options.applied)),
    unsettled: shareOf(text(options.unsettled) ?? '0'),
    instrument: text(options.instrument),
  }
}

function oneOfTwo(codes: string | undefined, applied: string | undefined): string | undefined {
  if (codes === undefined || applied === undefined) return codes
  throw new OgeeError('usage', 'Give --codes or --applied, not both.')
}

function shareOf(typed: string): number {
  const read = parseQuantity(typed, { label: '--unsettled', unit: '', also: ['%'] })
  const share = read === needsArithmetic ? Number.NaN : read.unit === '%' ? read.value / 100 : read.value
  if (share >= 0 && share <= 1) return share
  throw new OgeeError('usage', `--unsettled takes a share from 0 to 1, or 0 % to 100 %; ${typed} is not one.`)
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
  const codesOf = options.codes === undefined ? () => options.applied : await readCodes(options.codes)
  const isLoaded = options.codes !== undefined || options.applied !== 'neutral'
  const columns = { applied: isLoaded, instrument: options.instrument }
  const bench = { codesOf, unsettled: options.unsettled }
  let pending = isCsv ? simulatedHeader({ readings: design.measurement.readings ?? 1, ...columns }) : ''
  for (let number = 0; number < options.units; number += 1) {
    for (const measurement of simulateUnit(design, options.seed, number, options, bench)) {
      pending += isCsv ? simulatedRows(measurement, columns) : asLine(measurement, options.instrument)
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
function asLine({ points, ...rest }: SimulatedMeasurement, instrument: string | undefined): string {
  const asPoints = points.map(({ code, readings }) =>
    readings.length > 1 ? { code, readings } : { code, measured: readings[0] },
  )
  const conditions = instrument === undefined ? {} : { conditions: { instrument } }
  return `${JSON.stringify({ ...rest, ...conditions, points: asPoints })}\n`
}
