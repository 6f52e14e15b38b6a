import type { Residual, ResidualLine } from '../../../shared/solver/sizing/types.ts'
import { fixed } from '../../ui/number-format.ts'
import type { PlotTableData } from '../../ui/plot/plot-figure.tsx'

export type ResidualUnit = 'V' | 'LSB' | 'ppm'
export const residualUnits: readonly ResidualUnit[] = ['V', 'LSB', 'ppm']

/** The prefix under which the largest volts have one to three digits before the point. */
export function voltColumn({ worstCaseV }: Residual): { name: string; perVolt: number } {
  if (worstCaseV >= 1) return { name: 'V', perVolt: 1 }
  return worstCaseV >= 1e-3 ? { name: 'mV', perVolt: 1e3 } : { name: 'µV', perVolt: 1e6 }
}

export const pathWords = {
  gain: 'by way of gain',
  offset: 'by way of offset',
  neither: 'neither',
} as const satisfies Record<ResidualLine['path'], string>

/** Every digit, for a spreadsheet. */
export function residualCsv({
  lines,
  worstCaseV,
  rssV,
  worstCaseLsb,
  rssLsb,
  worstCasePpm,
  rssPpm,
}: Residual): Pick<PlotTableData, 'csvHead' | 'csvRows'> {
  return {
    csvHead: [
      'line',
      'path',
      'worst_v',
      'standard_v',
      'worst_lsb',
      'worst_ppm_of_fsr',
      'share_of_worst_case',
    ],
    csvRows: [
      ...lines.map((line) => [
        line.name,
        line.path,
        line.worstV,
        line.standardV,
        line.worstLsb,
        line.worstPpm,
        line.share,
      ]),
      ['worst case, sum', '', worstCaseV, null, worstCaseLsb, worstCasePpm, null],
      ['root sum square, 95 %', '', rssV, null, rssLsb, rssPpm, null],
    ],
  }
}

/** Narrow pages have room for one unit. */
export function columnLook(one: ResidualUnit, chosen: ResidualUnit): string {
  return one === chosen ? 'table-cell font-medium' : 'hidden medium:table-cell print:table-cell'
}

/** "77 %", "3.6 %" */
export const shareText = (share: number): string => `${fixed(share * 100, share < 0.0995 ? 1 : 0)} %`
