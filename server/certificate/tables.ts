import type { CertificateFacts } from './facts.ts'
import { ink, page, type Sheet } from './sheet.ts'
import { putVerdict } from './verdict.ts'
import { number, whole } from './words.ts'

type Row = {
  code: number
  idealV: number
  found: { measuredV: number; errorV: number } | null
  left: NonNullable<CertificateFacts['left']>['result']['points'][number] | null
}

/** Longer measurements stand whole in the attached records. */
const rowsMost = 300
const rowHeight = 13.2
/** Right ends of the columns, from the left edge. */
const ends = [42, 100, 162, 212, 256, 320, 366, 406, 436]
const size = 8

/** What was measured before the trim beside what was measured after it, code by code; as long as the measurement is. */
export function putPoints(sheet: Sheet, facts: CertificateFacts, lsbV: number): void {
  sheet.section('As found and as left', 60)
  putHeads(sheet, facts)
  const rows = rowsOf(facts)
  for (const row of rows.slice(0, rowsMost)) {
    if (sheet.room(rowHeight)) putHeads(sheet, facts)
    putRow(sheet, row, lsbV)
  }
  sheet.y += 3
  const { found, left } = facts
  const note = [
    rows.length > rowsMost
      ? `The first ${rowsMost} of ${whole(rows.length)} codes; all stand in the attached records.`
      : '',
    'Error is measured less ideal.',
    left
      ? 'U: expanded uncertainty of one point at about 95 %, the instrument’s limits taken as rectangular.'
      : '',
    found
      ? `As found: record ${whole(found.number)}, codes ${appliedText(found.applied)}.`
      : 'No measurement as found is recorded.',
  ]
  sheet.paragraph(note.filter(Boolean).join(' '), { size: 7.5, colour: ink.second })
}

function putHeads(sheet: Sheet, { left }: CertificateFacts): void {
  const heads = [
    'code',
    'ideal V',
    'as found V',
    'error µV',
    'error LSB',
    'as left V',
    'error µV',
    'error LSB',
    'U µV',
  ]
  // Without a measurement as left its columns would be promises.
  const shown = left === null ? heads.slice(0, 5) : heads
  for (const [i, head] of shown.entries()) {
    sheet.put(head, page.left + ends[i]!, sheet.y, {
      size,
      align: 'right',
      colour: ink.second,
      face: 'strong',
    })
  }
  if (left) sheet.put('decision', page.left + 444, sheet.y, { size, colour: ink.second, face: 'strong' })
  sheet.y += 12
  sheet.line(page.left, page.right, sheet.y)
  sheet.y += 2
}

function putRow(sheet: Sheet, { code, idealV, found, left }: Row, lsbV: number): void {
  const decimals = Math.max(6, Math.min(9, Math.ceil(-Math.log10(lsbV / 100))))
  const cells = [
    whole(code),
    number(idealV, 6),
    found ? number(found.measuredV, decimals) : '',
    found ? number(found.errorV * 1e6, 1, true) : '',
    found ? number(found.errorV / lsbV, 2, true) : '',
    left ? number(left.measuredV, decimals) : '',
    left ? number(left.errorV * 1e6, 1, true) : '',
    left ? number(left.errorLsb, 2, true) : '',
    left && left.expandedUncertaintyV !== null ? number(left.expandedUncertaintyV * 1e6, 1) : '',
  ]
  for (const [i, cell] of cells.entries()) {
    if (cell !== '') sheet.put(cell, page.left + ends[i]!, sheet.y, { size, align: 'right' })
  }
  if (left)
    putVerdict(sheet, left.outcome, page.left + 444, sheet.y, {
      size: left.outcome.includes('conditional') ? 5.4 : size,
    })
  sheet.y += rowHeight
  sheet.line(page.left, page.right, sheet.y - 2, ink.hair)
}

function rowsOf({ found, left }: CertificateFacts): Row[] {
  const rows = new Map<number, Row>()
  for (const { code, idealV, measuredV, errorV } of found?.result.fit.residuals ?? []) {
    rows.set(code, { code, idealV, found: { measuredV, errorV }, left: null })
  }
  for (const point of left?.result.points ?? []) {
    const { code, idealV } = point
    rows.set(code, { ...(rows.get(code) ?? { code, idealV, found: null }), left: point })
  }
  return [...rows.values()].sort((a, b) => a.code - b.code)
}

function appliedText(applied: NonNullable<CertificateFacts['found']>['applied']): string {
  if (applied === null || applied === 'neutral') return 'neutral'
  return Object.entries(applied)
    .map(([which, code]) => `${which} ${code}`)
    .join(', ')
}

/** The fitted line before and after. */
export function putLines(sheet: Sheet, { found, left }: CertificateFacts): void {
  const before = found?.result.fit ?? null
  const after = left?.result.fit ?? null
  const method = (after ?? before)?.method
  if (!method) return
  sheet.section(`${after ? 'Line before and after' : 'Line as found'}, ${method.replace('-', ' ')}`, 62)
  const columns = [page.left + 200, page.left + 262, page.left + 380]
  const heads = ['as found', ...(after ? ['as left', 'standard uncertainty, as left'] : [])]
  for (const [i, head] of heads.entries()) {
    sheet.put(head, columns[i]!, sheet.y, { size, align: 'right', colour: ink.second, face: 'strong' })
  }
  sheet.y += 12
  sheet.line(page.left, columns[2]!, sheet.y)
  const u = after?.standardUncertainty ?? null
  const rows = [
    ['offset error, µV', ink.tide, before?.offsetErrorV, after?.offsetErrorV, u?.offsetV, 1e6],
    ['gain error, ppm', ink.copper, before?.gainErrorPpm, after?.gainErrorPpm, u?.gainPpm, 1],
    ['linearity seen, LSB', ink.text, before?.linearity.maxLsb, after?.linearity.maxLsb, undefined, 1],
  ] as const
  for (const [name, colour, a, b, c, factor] of rows) {
    sheet.y += 2
    sheet.put(name, page.left, sheet.y, { size, face: 'strong', colour })
    const signed = colour !== ink.text
    for (const [i, value] of [a, b, c].entries()) {
      if (value === undefined) continue
      sheet.put(number(value * factor, 2, signed && i < 2), columns[i]!, sheet.y, { size, align: 'right' })
    }
    sheet.y += rowHeight - 2
    sheet.line(page.left, columns[2]!, sheet.y - 1, ink.hair)
  }
}
