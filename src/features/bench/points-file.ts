import type { Design } from '../../../shared/contract/design.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { PointGroup } from '../../../shared/points/group.ts'
import { type PointsCsv, parsePointsCsvAsync } from '../../../shared/points/parse-csv.ts'
import { refuseLargeCsv } from '../../../shared/points/split-csv.ts'
import { toCsv } from '../../../shared/points/to-csv.ts'
import { codeOfWordText } from '../../../shared/solver/coding.ts'
import { emptyRow, type Row } from './grid-state.ts'

const arithmetic = () => import('../../../shared/quantity/arithmetic.ts')

/** Reads a points CSV that a person chose or dropped. Nothing on the page changes by it. */
export async function readPointsFile(file: File, design: Design): Promise<PointsCsv> {
  refuseLargeCsv(file.size)
  // A file that names no channel or range is of the one that is on the page.
  return onlyKnown(await parsePointsCsvAsync(textOf(await file.arrayBuffer(), file.name), arithmetic), design)
}

/** Whatever its name says, a file that is no text is refused; taken loosely, letters of names would be changed unseen. */
function textOf(bytes: ArrayBuffer, name: string): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes)
  } catch (cause) {
    throw new OgeeError('invalid-document', `${name} is not UTF-8 text. Save it as CSV in UTF-8.`, { cause })
  }
}

/** A channel or range that the design does not have costs its measurement, and is named. */
function onlyKnown({ groups, problems }: PointsCsv, design: Design): PointsCsv {
  const known = { channel: design.channels, range: design.ranges.map((range) => range.id) }
  const result: PointsCsv = { groups: [], problems: [...problems] }
  for (const group of groups) {
    const wrong = (['channel', 'range'] as const).find(
      (column) => group[column] !== undefined && !known[column].includes(group[column]),
    )
    if (wrong === undefined) {
      result.groups.push(group)
      continue
    }
    const message = `Line ${group.firstLine}, ${wrong}: the design has no ${wrong} ${group[wrong]}. It has ${known[wrong].join(', ')}.`
    result.problems.push({ code: `${wrong}-unknown`, line: group.firstLine, column: wrong, message })
  }
  return result
}

/** Points of a file as rows of the grid, written so that every double stays the same. */
export function rowsOf(group: PointGroup, design: Design): Row[] {
  const { bits, coding } = design.converter
  return group.points.map((point) => {
    const fromWord = point.word === undefined ? null : codeOfWordText(point.word, bits, coding)
    const code = point.code ?? fromWord
    const { readAt, temperatureC } = point
    const extra = {
      ...(readAt === undefined ? {} : { readAt }),
      ...(temperatureC === undefined ? {} : { temperatureC }),
    }
    return {
      ...emptyRow(code === null || code === undefined ? `${point.target} V` : String(code)),
      measured: point.readings ? point.readings.join('; ') : String(point.measured),
      u: point.uncertainty === undefined ? '' : String(point.uncertainty),
      ...(Object.keys(extra).length === 0 ? {} : { extra }),
    }
  })
}

/** Hands a file to the browser to save. */
export function savePoints(group: Omit<PointGroup, 'firstLine' | 'lastLine'>, name: string): void {
  const text = toCsv([{ ...group, firstLine: 2, lastLine: group.points.length + 1 }])
  const url = URL.createObjectURL(new Blob([text], { type: 'text/csv;charset=utf-8' }))
  const link = document.createElement('a')
  link.href = url
  link.download = `${name.replaceAll(/[^\p{L}\p{N}._-]+/gu, '-')}.csv`
  link.click()
  setTimeout(() => URL.revokeObjectURL(url), 10_000)
}
