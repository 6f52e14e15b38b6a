import type { Design } from '../shared/contract/design.ts'
import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import { measurementsOf, unitErrorsOf } from '../shared/points/unit-errors.ts'
import { measuredUnits } from '../shared/solver/sizing/measured-units.ts'
import type { MeasuredUnits, UnitError } from '../shared/solver/sizing/types.ts'
import { loadArithmetic } from './arithmetic.ts'
import { readText } from './files.ts'
import type { Io } from './io.ts'

/** The units of some points CSV, all files together. */
export async function readMeasuredUnits(
  io: Io,
  paths: readonly string[],
  design: Design,
  range: string | undefined,
): Promise<MeasuredUnits> {
  const errors: UnitError[] = []
  for (const path of paths) {
    const text = await readText(io, path, limits.benchCsvMaxBytes, () => tooLarge(path))
    errors.push(...unitErrorsOf(await measurementsOf(text, path, loadArithmetic), design, range))
  }
  return measuredUnits(errors)
}

const tooLarge = (path: string) =>
  new OgeeError('csv-too-large', `${path} is over 10 MB. Give several smaller files.`)
