import type { VerifyDocument } from '../shared/contract/verify.ts'
import type { LimitWithUnit, VerifyResult } from '../shared/solver/types.ts'
import { type Rendering, verdictText } from './output.ts'
import { decimals, lsb, percent, volts } from './quantities.ts'
import { pairs, textTable } from './table.ts'

/** A verification, for `ogee verify` and for records. */

type AnyVerify = VerifyResult | VerifyDocument

export function verifyRendering(document: VerifyResult, tolerance: LimitWithUnit | undefined): Rendering {
  const { points } = document
  return {
    json: document,
    lines: points,
    table: (colour) => verifyTable(document, colour, tolerance),
    csv: {
      heads: ['code', 'ideal_v', 'measured_v', 'error_v', 'error_lsb', 'u_v', 'outcome', 'conformance'],
      rows: points.map((point) => [
        point.code,
        point.idealV,
        point.measuredV,
        point.errorV,
        point.errorLsb,
        point.expandedUncertaintyV,
        point.outcome,
        point.conformanceProbability,
      ]),
    },
  }
}

export function verifyTable(document: AnyVerify, colour: boolean, tolerance?: LimitWithUnit): string {
  const { points, worst, outcome, rule, tur, range, toleranceV } = document
  const asked = tolerance && tolerance.unit !== 'V' ? `, ${tolerance.value} ${tolerance.unit}` : ''
  const head = pairs([
    ['Range', range],
    ['Outcome', verdictText(outcome, colour)],
    ['Rule', rule],
    ['Tolerance', `${volts(toleranceV)}${asked}`],
    ['Worst', `${volts(worst.errorV)}, ${lsb(worst.errorLsb)} at code ${worst.code}`],
    ['TUR', tur === null ? '–' : decimals(tur, 1)],
  ])
  const columns = ['Code', 'Ideal V', 'Measured V', 'Error LSB', 'U', 'Conforms', 'Outcome']
  const rows = points.map((point) => [
    point.code,
    decimals(point.idealV, 7),
    decimals(point.measuredV, 7),
    decimals(point.errorLsb, 3),
    point.expandedUncertaintyV === null ? null : volts(point.expandedUncertaintyV),
    point.conformanceProbability === null ? null : percent(point.conformanceProbability),
    point.outcome,
  ])
  return `${head}\n${textTable(
    columns.map((name, i) => ({ head: name, right: i < 6 })),
    rows,
  )}`
}
