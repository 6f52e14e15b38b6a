import type { Design } from '../shared/contract/design.ts'
import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import { parsePointsCsvAsync } from '../shared/points/parse-csv.ts'
import type { UnitError } from '../shared/solver/sizing/types.ts'
import { unitError } from '../shared/solver/sizing/unit-error.ts'
import { loadArithmetic } from './arithmetic.ts'
import { readText } from './files.ts'
import type { Io } from './io.ts'

/**
 * The errors of every measurement in some points CSV that belongs to the range, with what was loaded while measuring
 * taken out again. A bad row is an error here: an extent from half of the units would be too small.
 */
export async function readMeasuredUnits(
  io: Io,
  paths: readonly string[],
  design: Design,
  range: string | undefined,
): Promise<UnitError[]> {
  const units: UnitError[] = []
  for (const path of paths) {
    const text = await readText(io, path, limits.benchCsvMaxBytes, () => tooLarge(path))
    const csv = await parsePointsCsvAsync(text, loadArithmetic)
    const problem = csv.problems[0]
    if (problem) {
      throw new OgeeError(problem.code, `${path}: ${problem.message}`, {
        errors: csv.problems.map(({ line, column, message }) => ({
          path: column === null ? `line ${line}` : `line ${line}, ${column}`,
          message,
        })),
      })
    }
    for (const group of csv.groups) {
      if (range !== undefined && group.range !== undefined && group.range !== range) continue
      units.push(unitError(design, group.points, { rangeId: group.range ?? range, applied: group.applied }))
    }
  }
  return units
}

const tooLarge = (path: string) =>
  new OgeeError('csv-too-large', `${path} is over 10 MB. Give several smaller files.`)
