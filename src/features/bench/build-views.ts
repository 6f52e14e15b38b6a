import { type ConverterRange, idealV, nearestCode } from '../../../shared/solver/converter.ts'
import { mean } from '../../../shared/solver/points.ts'
import type { FitResult, VerifyResult } from '../../../shared/solver/types.ts'
import { fixed } from '../../ui/number-format.ts'
import type { CellProblem } from './problems.ts'
import type { ReadRow } from './read-cells.ts'
import type { RowView } from './row-view.ts'

/** Decimals of a volt column: enough that a tenth of an LSB is seen. */
export const voltDecimals = (lsbV: number): number =>
  Math.max(0, Math.min(9, Math.ceil(-Math.log10(lsbV)) + 1))

export type Shown = { fit: FitResult | null; verify: VerifyResult | null }

/** What stands beside the typed text of each row. */
export function buildViews(
  rows: readonly ReadRow[],
  problems: readonly CellProblem[],
  range: ConverterRange,
  shown: Shown,
): RowView[] {
  const decimals = voltDecimals(range.lsbV)
  const residuals = take(shown.fit?.residuals ?? [])
  const judged = take(shown.verify?.points ?? [])
  const flagged = new Set(shown.fit?.flags.filter((f) => f.flag !== 'bow').map((f) => f.code) ?? [])
  return rows.map((row, index) => {
    const own = problems.filter((problem) => problem.row === index)
    const code = codeOf(row, range)
    const y = measuredOf(row)
    const isGood = own.length === 0 && code !== null && y !== null
    const ideal = code === null ? null : idealV(range, code)
    const error = isGood && ideal !== null ? y - ideal : null
    const residual = isGood ? residuals(code, y) : undefined
    const judge = isGood ? judged(code, y) : undefined
    const U = judge?.expandedUncertaintyV
    return {
      code,
      ideal: ideal === null ? null : fixed(ideal, decimals),
      error: error === null ? null : fixed(error * 1e6, 1, 'always'),
      residual: residual ? fixed(residual.residualLsb, 2, 'always') : null,
      errorLsb: error === null ? null : fixed(error / range.lsbV, 2, 'always'),
      expanded: U === null || U === undefined ? null : fixed(U / range.lsbV, 2),
      decision: judge?.outcome ?? null,
      isFlagged: code !== null && y !== null && flagged.has(code),
      measuredAs: measuredAs(row, decimals + 1),
      numbers: {
        ideal,
        error,
        residual: residual?.residualLsb ?? null,
        errorLsb: error === null ? null : error / range.lsbV,
        expanded: U === null || U === undefined ? null : U / range.lsbV,
      },
      problems: Object.fromEntries(own.map((problem) => [problem.column, problem.message])),
    }
  })
}

export function codeOf(row: ReadRow, range: ConverterRange): number | null {
  if (row.code === null) return null
  const code = 'code' in row.code ? row.code.code : nearestCode(range, row.code.target)
  return code !== null && code >= 0 && code < range.count ? code : null
}

export function measuredOf(row: ReadRow): number | null {
  if (row.measured === null) return null
  return 'readings' in row.measured ? mean(row.measured.readings) : row.measured.measured
}

function measuredAs({ measured }: ReadRow, decimals: number): string | null {
  if (measured === null) return null
  if ('readings' in measured)
    return `${fixed(mean(measured.readings), decimals)}, n = ${measured.readings.length}`
  return measured.isComputed ? `= ${fixed(measured.measured, decimals)}` : null
}

type Solved = { code: number; measuredV: number }

/** The solver sorts points; each is found again by its code and value, replicates one after another. */
function take<T extends Solved>(solved: readonly T[]): (code: number, y: number) => T | undefined {
  const left = [...solved]
  return (code, y) => {
    const at = left.findIndex((one) => one.code === code && one.measuredV === y)
    return at < 0 ? undefined : left.splice(at, 1)[0]
  }
}
