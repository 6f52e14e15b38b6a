import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import type { PointGroup } from '../shared/points/group.ts'
import { onlyGroup, parsePointsCsvAsync } from '../shared/points/parse-csv.ts'
import type { MeasuredPoint } from '../shared/solver/types.ts'
import type { Applied } from './applied.ts'
import { loadArithmetic } from './arithmetic.ts'
import { readText } from './files.ts'
import type { Io } from './io.ts'

/** What flags say about the measurement that is wanted. A file with several must hold exactly one such. */
export type Wanted = {
  unit?: string | undefined
  channel?: string | undefined
  range?: string | undefined
  applied?: Applied | undefined
}

export type Measured = Omit<PointGroup, 'applied' | 'firstLine' | 'lastLine'> & {
  applied: Applied | undefined
  /** The same unit and channel measured in other ranges of the file, by range. */
  otherRanges: Record<string, MeasuredPoint[]>
}

/** Reads one measurement from a points CSV, or from standard input for `-`. */
export async function readMeasurement(io: Io, path: string, wanted: Wanted): Promise<Measured> {
  const text = await readText(io, path, limits.benchCsvMaxBytes, () => tooLarge(path))
  const csv = await parsePointsCsvAsync(text, loadArithmetic)
  const matching = csv.groups.length > 1 ? csv.groups.filter((group) => matches(group, wanted)) : csv.groups
  const group = onlyGroup({ ...csv, groups: matching.length > 0 ? matching : csv.groups })
  const others = csv.groups.filter(
    ({ unit, channel, range }) => unit === group.unit && channel === group.channel && range !== group.range,
  )
  return {
    ...measuredFrom(group, wanted),
    otherRanges: Object.fromEntries(others.map(({ range = '', points }) => [range, points])),
  }
}

/** What rows and flags say of one measurement together. */
export function measuredFrom(group: PointGroup, wanted: Wanted): Measured {
  return {
    ...group,
    range: agreed('range', wanted.range, group.range),
    applied: agreedCodes(wanted.applied, group.applied),
    otherRanges: {},
  }
}

const tooLarge = (path: string) =>
  new OgeeError(
    'csv-too-large',
    `${path === '-' ? 'Standard input' : path} is over 10 MB. One measurement is smaller; for many units use \`ogee batch\`.`,
  )

function matches(group: PointGroup, wanted: Wanted): boolean {
  return (['unit', 'channel', 'range'] as const).every(
    (name) => wanted[name] === undefined || group[name] === undefined || wanted[name] === group[name],
  )
}

/** A flag and a column may say the same thing, never different things. */
export function agreed(
  name: string,
  flag: string | undefined,
  column: string | undefined,
): string | undefined {
  if (flag === undefined || column === undefined || flag === column) return flag ?? column
  throw new OgeeError(
    'invalid-request',
    `--${name} says ${flag} and the points say ${column}. Leave one of them out.`,
  )
}

function agreedCodes(flag: Applied | undefined, columns: PointGroup['applied']): Applied | undefined {
  const column: Applied | undefined = columns && {
    ...(columns.gain === undefined ? {} : { gain: columns.gain }),
    ...(columns.offset === undefined ? {} : { offset: columns.offset }),
  }
  const named = (codes: Applied | undefined) =>
    codes === undefined || codes === 'neutral'
      ? codes
      : (['gain', 'offset'] as const).flatMap((which) => codes[which] ?? '–').join(' and ')
  agreed('applied', named(flag), named(column))
  return flag ?? column
}
