import { OgeeError } from '../errors.ts'
import type { UnitError } from '../solver/sizing/types.ts'
import { unitError } from '../solver/sizing/unit-error.ts'
import type { Design } from '../solver/types.ts'
import { parsePointsCsvAsync } from './parse-csv.ts'

type LoadArithmetic = Parameters<typeof parsePointsCsvAsync>[1]

/**
 * The errors of every measurement in a points CSV that belongs to the range, with what was loaded while measuring taken
 * out again. A bad row is an error here: an extent from half of the units would be too small.
 * @param text the CSV, dialect of contract.md
 * @param name of the file, for sentences
 * @throws the first row's refusal, all of them in `errors` by line and column; as `unitError`
 */
export async function unitErrorsOf(
  text: string,
  name: string,
  design: Design,
  range: string | undefined,
  load: LoadArithmetic,
): Promise<UnitError[]> {
  const csv = await parsePointsCsvAsync(text, load)
  const [problem] = csv.problems
  if (problem) {
    throw new OgeeError(problem.code, `${name}: ${problem.message}`, {
      errors: csv.problems.map(({ line, column, message }) => ({
        path: column === null ? `line ${line}` : `line ${line}, ${column}`,
        message,
      })),
    })
  }
  return csv.groups
    .filter((group) => range === undefined || group.range === undefined || group.range === range)
    .map((group) =>
      unitError(design, group.points, { rangeId: group.range ?? range, applied: group.applied }),
    )
}
