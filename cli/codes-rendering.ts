import type { CodesResult, LimitWithUnit, TrimResult, Which } from '../shared/solver/types.ts'
import { fitRows } from './fit-rows.ts'
import { type Rendering, verdictText } from './output.ts'
import { lsb, percent, plusMinusVolts, ppm, volts } from './quantities.ts'
import { type Cell, pairs, textTable } from './table.ts'

/** Codes and their fit, for `ogee codes` and for records. */

type AnyCodes = {
  range: string
  fit: CodesResult['fit']
  trim: Omit<TrimResult, 'predicted' | 'shared'> & { predicted: Predicted | null }
}
type Predicted = Omit<NonNullable<TrimResult['predicted']>, 'effectV'>

export const codesCsv = {
  heads: [
    'gain_code',
    'gain_word',
    'offset_code',
    'offset_word',
    'offset_error_v',
    'gain_error_ppm',
    'worst_lsb',
  ] as const,
  row: ({ fit, trim }: AnyCodes): Cell[] => [
    trim.codes?.gain,
    trim.words?.gain,
    trim.codes?.offset,
    trim.words?.offset,
    fit.offsetErrorV,
    fit.gainErrorPpm,
    trim.predicted?.worstLsb,
  ],
}

export function codesRendering(document: CodesResult, target: LimitWithUnit): Rendering {
  const { range, trim } = document
  return {
    json: document,
    table: (colour) => codesTable(document, colour, target),
    csv: {
      heads: ['range', 'verdict', ...codesCsv.heads],
      rows: [[range, trim.verdict, ...codesCsv.row(document)]],
    },
  }
}

export function codesTable({ range, fit, trim }: AnyCodes, colour: boolean, target?: LimitWithUnit): string {
  const others = trim.reasons.filter((reason) => reason !== trim.verdict)
  const head: [string, string][] = [
    ['Range', range],
    ['Verdict', verdictText(trim.verdict, colour) + (others.length > 0 ? ` (${others.join(', ')})` : '')],
  ]
  const end: [string, string][] = [
    ...fitRows(fit),
    ...predictedRows(trim.predicted, target),
    ...shortfallRows(trim),
  ]
  if (trim.notes.length > 0) end.push(['Notes on codes', trim.notes.join(', ')])
  return `${pairs(head)}\n${adjusterTable(trim)}\n${pairs(end)}`
}

/** One column an adjuster; an absent adjuster has none. */
function adjusterTable(trim: AnyCodes['trim']): string {
  const present = (['gain', 'offset'] as const).filter((which) => trim.exactNodeV[which] !== undefined)
  const names = { gain: 'Gain', offset: 'Offset' }
  const row = (name: string, cell: (which: Which) => Cell) => [name, ...present.map(cell)]
  const reach = (which: Which) => {
    const used = trim.reachUsed[which]
    return used === null || used === undefined ? null : percent(used)
  }
  const node = (value: number | undefined) => (value === undefined ? null : volts(value, 5))
  return textTable(
    [{ head: '' }, ...present.map((which) => ({ head: names[which], right: true }))],
    [
      row('Code', (which) => trim.codes?.[which]),
      row('Word', (which) => trim.words?.[which]),
      row('Node', (which) => node(trim.nodeV?.[which])),
      row('Exact', (which) => node(trim.exactNodeV[which])),
      row('Reach used', reach),
    ],
  )
}

function predictedRows(predicted: Predicted | null, target: LimitWithUnit | undefined): [string, string][] {
  if (predicted === null) return []
  const u = predicted.expandedUncertaintyV
  const size = `${lsb(predicted.worstLsb)} (${volts(predicted.worstV)}${u === null ? '' : ` ${plusMinusVolts(u)}`}) at ${volts(predicted.atV, 5)}`
  return [
    ['Predicted offset', volts(predicted.offsetErrorV)],
    ['Predicted gain', ppm(predicted.gainErrorPpm)],
    ['Predicted worst', `${size}${target ? `, target ${target.value} ${target.unit}` : ''}`],
  ]
}

function shortfallRows({ shortfall }: AnyCodes['trim']): [string, string][] {
  if (shortfall === null) return []
  const rows = (['gain', 'offset'] as const).flatMap((which): [string, string][] => {
    const missing = shortfall[which]
    if (!missing) return []
    return [
      [
        `Out of reach, ${which}`,
        `wanted ${volts(missing.wantedV)}, limit ${volts(missing.limitV)} by the ${missing.by}`,
      ],
    ]
  })
  return [...rows, ['Would remain', volts(shortfall.remainingWorstV)]]
}
