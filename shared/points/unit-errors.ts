import { isOgeeError, OgeeError } from '../errors.ts'
import type { LoadArithmetic } from '../quantity/parse.ts'
import type { UnitError } from '../solver/sizing/types.ts'
import { unitError } from '../solver/sizing/unit-error.ts'
import type { Design } from '../solver/types.ts'
import type { PointGroup } from './group.ts'
import { parsePointsCsvAsync } from './parse-csv.ts'

/**
 * Every measurement of a points CSV. A bad row is an error here: an extent from half of the units would be too small.
 * @param text the CSV, dialect of contract.md
 * @param name of the file, for sentences
 * @throws the first row's refusal, all of them in `errors` by line and column; as `parsePointsCsv`
 */
export async function measurementsOf(
  text: string,
  name: string,
  load: LoadArithmetic,
): Promise<PointGroup[]> {
  const { groups, problems } = await parsePointsCsvAsync(text, load)
  const [problem] = problems
  if (problem) {
    throw new OgeeError(problem.code, `${name}: ${problem.message}`, {
      errors: problems.map(({ line, column, message }) => ({
        path: column === null ? `line ${line}` : `line ${line}, ${column}`,
        message,
      })),
    })
  }
  return groups
}

/**
 * The errors of the measurements that belong to a range, with what was loaded while measuring taken out again.
 * @param range may be left out where the design has one
 * @throws as `unitError`; the sentence says of which unit and lines
 */
export function unitErrorsOf(
  groups: readonly PointGroup[],
  design: Design,
  range: string | undefined,
): UnitError[] {
  return groups
    .filter((group) => range === undefined || group.range === undefined || group.range === range)
    .map((group) => {
      try {
        return unitError(design, group.points, { rangeId: group.range ?? range, applied: group.applied })
      } catch (error) {
        if (!isOgeeError(error)) throw error
        const unit = group.unit === undefined ? '' : `Unit ${group.unit}, `
        const lines = `${unit === '' ? 'Lines' : 'lines'} ${group.firstLine} to ${group.lastLine}`
        throw new OgeeError(error.code, `${unit}${lines}: ${error.message}`, { errors: error.errors })
      }
    })
}
