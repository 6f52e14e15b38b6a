import type { Design } from '../../../shared/contract/design.ts'
import type { LotUnit } from '../../../shared/contract/lots.ts'
import { codesHeads, codesRows } from '../../../shared/lots/codes-table.ts'
import { csvLine } from '../../../shared/points/csv-line.ts'
import { download } from '../../ui/download.ts'

/** The accepted codes of a lot as a file: CSV with formulas kept from running, or a JSON object a line. */
export function downloadCodes(
  name: string,
  format: 'csv' | 'ndjson',
  design: Design,
  units: readonly LotUnit[],
  leftOut: ReadonlySet<string>,
): void {
  const rows = codesRows(design, units, leftOut)
  if (format === 'ndjson') {
    const text = rows.map((row) => `${JSON.stringify(row)}\n`).join('')
    download(`${name}.ndjson`, text, 'application/x-ndjson')
    return
  }
  const lines = [csvLine(codesHeads), ...rows.map((row) => csvLine(codesHeads.map((head) => row[head])))]
  download(`${name}.csv`, lines.map((line) => `${line}\r\n`).join(''), 'text/csv;charset=utf-8')
}
