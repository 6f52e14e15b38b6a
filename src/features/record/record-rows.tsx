import type { RefObject } from 'react'
import type { RecordLine } from '../../../shared/contract/record.ts'
import { fixed } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { None } from '../../ui/table.tsx'

/** The rows of a windowed list that are drawn, and what stands for the others. */
export type RecordRows = {
  /** In order. A record is undefined while its page is read. */
  rows: readonly { index: number; record: RecordLine | undefined }[]
  /** Rows known to exist, drawn or not. */
  count: number
  /** Of the whole list: null while its end is not known, undefined where its beginning is not known either. */
  total: number | null | undefined
  /** Holds the rows. */
  body: RefObject<HTMLElement | null>
  /** Of a row, px. */
  height: number
  /** The current row; links of rows carry `data-row` for the keys. */
  row: number
  onRow: (row: number) => void
}

/** How many rows are left out before each row drawn, and after the last. */
export function gapsOf(
  rows: RecordRows['rows'],
  count: number,
): { before: readonly number[]; after: number } {
  return {
    before: rows.map(({ index }, i) => index - (rows[i - 1]?.index ?? -1) - 1),
    after: Math.max(0, count - 1 - (rows.at(-1)?.index ?? -1)),
  }
}

export function numberOr(value: number | null, decimals: number, factor: number, signed: boolean) {
  if (value === null) return <None />
  return <NumberText>{fixed(value * factor, decimals, signed ? 'always' : 'auto')}</NumberText>
}
