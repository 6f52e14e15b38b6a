import type { ConverterRange } from '../../../shared/solver/converter.ts'
import { idealV } from '../../../shared/solver/converter.ts'
import { codeOf, measuredOf } from './build-views.ts'
import type { Row } from './grid-state.ts'
import type { CellProblem } from './problems.ts'
import type { ReadRow } from './read-cells.ts'

export type RereadUnit = 'mV' | 'µV'
const factors = { mV: 1e-3, µV: 1e-6 } as const
const number = /^\s*[-+\u2212]?[\d.]+(?:[eE][-+]?\d+)?\s*V?\s*$/

const bare = /^\s*[-+\u2212]?[\d.]+(?:[eE][-+]?\d+)?\s*$/

/** Problems of readings that lie further from ideal than the plan allows. */
export function farProblems(
  problems: readonly CellProblem[],
  read: readonly ReadRow[],
  range: ConverterRange,
  allowedV: number,
): CellProblem[] {
  return problems.filter(({ row, column }) => {
    const one = read[row]
    const code = one ? codeOf(one, range) : null
    const y = one ? measuredOf(one) : null
    return (
      column === 'measured' && code !== null && y !== null && Math.abs(y - idealV(range, code)) > allowedV
    )
  })
}

/**
 * A unit under which every far-off bare reading would be plausible: millivolts typed as volts. Null when there is
 * none, or when some far-off reading says its own unit.
 */
export function rereadUnit(
  far: readonly CellProblem[],
  rows: readonly Row[],
  read: readonly ReadRow[],
  range: ConverterRange,
  allowedV: number,
): RereadUnit | null {
  if (far.length === 0) return null
  for (const unit of ['mV', 'µV'] as const) {
    const fits = far.every(({ row }) => {
      const one = read[row]
      const code = one ? codeOf(one, range) : null
      const y = one ? measuredOf(one) : null
      if (code === null || y === null || !partsOf(rows[row]).every((part) => number.test(part))) return false
      return Math.abs(y * factors[unit] - idealV(range, code)) <= allowedV
    })
    if (fits) return unit
  }
  return null
}

const partsOf = (row: Row | undefined): string[] =>
  (row?.measured ?? '').split(';').filter((part) => part.trim() !== '')

/**
 * The column with the unit written out, the digits as typed. Bare readings that were not far off are taken along when
 * they stay plausible: whoever types millivolts types them down the whole column.
 */
export function rereadRows(
  rows: readonly Row[],
  read: readonly ReadRow[],
  far: readonly CellProblem[],
  unit: RereadUnit,
  range: ConverterRange,
  allowedV: number,
): readonly Row[] {
  const places = new Set(far.map((problem) => problem.row))
  const fits = (index: number): boolean => {
    const one = read[index]
    const code = one ? codeOf(one, range) : null
    const y = one ? measuredOf(one) : null
    const parts = partsOf(rows[index])
    if (code === null || y === null || parts.length === 0 || !parts.every((part) => bare.test(part)))
      return false
    return Math.abs(y * factors[unit] - idealV(range, code)) <= allowedV
  }
  return rows.map((row, index) => {
    if (!places.has(index) && !fits(index)) return row
    const parts = partsOf(row).map((part) => `${part.replace(/\s*V?\s*$/, '').trim()} ${unit}`)
    return { ...row, measured: parts.join('; ') }
  })
}
