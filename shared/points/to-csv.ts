import { guarded } from './formula-guard.ts'
import type { PointGroup } from './group.ts'
import { type Column, columns, groupColumns } from './row.ts'

/**
 * Writes measurements as a points CSV (comma, CRLF as RFC 4180 has it) that reads back to the same doubles. Columns
 * that no row uses are left out.
 * @example toCsv([{ points: [{ code: 0, measured: 0.1 }], firstLine: 2, lastLine: 2 }]) // 'code,measured\r\n0,0.1\r\n'
 */
export function toCsv(groups: readonly PointGroup[]): string {
  const rows = groups.flatMap((group) => group.points.map((point) => rowOf(group, point)))
  const used = columns.filter(
    (column) => column === 'code' || column === 'measured' || rows.some((row) => row[column] !== undefined),
  )
  const has = (column: Column): boolean => rows.some((row) => row[column] !== undefined)
  const kept = used.filter(
    (column) =>
      !(column === 'code' && !has('code') && (has('word') || has('target'))) &&
      !(column === 'measured' && !has('measured') && has('readings')),
  )
  const lines = [kept.join(','), ...rows.map((row) => kept.map((column) => cell(row[column])).join(','))]
  return `${lines.join('\r\n')}\r\n`
}

type Row = Partial<Record<Column, string | undefined>>

function rowOf(group: PointGroup, point: PointGroup['points'][number]): Row {
  const row: Row = {
    applied_gain: text(group.applied?.gain),
    applied_offset: text(group.applied?.offset),
    code: text(point.code),
    word: point.word,
    target: text(point.target),
    measured: text(point.measured),
    uncertainty: text(point.uncertainty),
    readings: point.readings?.map(String).join(';'),
    read_at: point.readAt,
    temperature: text(point.temperatureC),
  }
  for (const column of groupColumns) {
    if (column !== 'applied_gain' && column !== 'applied_offset') row[column] = named(group[column])
  }
  return row
}

/** A name that somebody gave, kept from being run as a formula; the reader takes the guard away again. */
function named(value: string | undefined): string | undefined {
  return value === undefined ? undefined : guarded(value)
}

/** The shortest decimal that is this double. */
function text(value: number | undefined): string | undefined {
  return value === undefined ? undefined : String(value)
}

function cell(value: string | undefined): string {
  if (value === undefined) return ''
  return /[",;\t\r\n]|^\s|\s$/.test(value) ? `"${value.replaceAll('"', '""')}"` : value
}
