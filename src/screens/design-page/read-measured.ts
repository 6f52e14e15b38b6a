import type { Design } from '../../../shared/contract/design.ts'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import type { PointGroup } from '../../../shared/points/group.ts'
import { measurementsOf, unitErrorsOf } from '../../../shared/points/unit-errors.ts'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import type { MeasuredUnits } from '../../../shared/solver/sizing/types.ts'
import type { Measured } from './answer.ts'

const load = () => import('../../../shared/quantity/arithmetic.ts')

/** Where a refusal of the units is shown: in the panel, not at a field of the design. */
export const measuredPlace = 'measured-units'

/** The units of a points CSV. @throws what is wrong with the file */
export async function readMeasured(text: string, name: string): Promise<Measured> {
  const groups = await measurementsOf(text, name, load)
  let last: { of: readonly unknown[]; units: MeasuredUnits } | null = null
  return {
    name,
    unitsFor: (design, rangeId) => {
      // What a unit's error rests on. Fitted again with a change of these alone, so that a key elsewhere is quick.
      const { converter, ranges, adjusters, measurement } = design
      const of = [converter.bits, rangeId, adjusters.gain, adjusters.offset, measurement, ...ranges]
      if (last === null || last.of.length !== of.length || last.of.some((one, i) => one !== of[i])) {
        last = { of, units: unitsOf(groups, design, rangeId) }
      }
      return last.units
    },
  }
}

function unitsOf(groups: readonly PointGroup[], design: Design, rangeId: string): MeasuredUnits {
  try {
    return measuredUnits(unitErrorsOf(groups, design, rangeId))
  } catch (error) {
    if (!isOgeeError(error)) throw error
    const errors = [{ path: `/${measuredPlace}`, message: error.message }]
    throw new OgeeError(error.code, error.message, { errors })
  }
}
