import type { Design } from '../contract/design.ts'
import type { LotUnit } from '../contract/lots.ts'
import { wordOf, wordText } from '../solver/coding.ts'

/** Columns of the codes of a lot. A code is an index; a word is what is sent, in the part's coding, as number and as hex. */
export const codesHeads = [
  'unit',
  'channel',
  'range',
  'standing',
  'pass',
  'gain_code',
  'gain_word',
  'gain_word_decimal',
  'offset_code',
  'offset_word',
  'offset_word_decimal',
  'number',
  'record',
  'at',
] as const

export type CodesRow = { [Column in (typeof codesHeads)[number]]: string | number | null }

/**
 * The accepted codes of the units of a lot, a row for each channel and range that has some. Reference units are not of the lot,
 * nor is what was left out of it at sign-off.
 * @param design of the lot's revision: how many bits each auxiliary DAC has, and its coding
 * @param leftOut serials, of `signOff.leftOut`
 * @example codesRows(design, []) // []
 */
export function codesRows(
  { adjusters }: Design,
  units: readonly LotUnit[],
  leftOut: ReadonlySet<string> = new Set(),
): CodesRow[] {
  const wordsOf = (which: 'gain' | 'offset', code: number | undefined) => {
    const source = adjusters[which]?.source
    if (code === undefined || source === undefined) return { code: null, word: null, decimal: null }
    const { bits, coding } = source
    return { code, word: wordText(code, bits, coding), decimal: wordOf(code, bits, coding) }
  }
  const ofLot = units.filter(({ unit, reference }) => !reference && !leftOut.has(unit))
  return ofLot.flatMap(({ unit, standing, places }) =>
    places.flatMap(({ channel, range, pass, codes }) => {
      if (codes === null) return []
      const gain = wordsOf('gain', codes.gain)
      const offset = wordsOf('offset', codes.offset)
      return {
        unit,
        channel,
        range,
        standing,
        pass,
        gain_code: gain.code,
        gain_word: gain.word,
        gain_word_decimal: gain.decimal,
        offset_code: offset.code,
        offset_word: offset.word,
        offset_word_decimal: offset.decimal,
        number: codes.number,
        record: codes.record,
        at: codes.at,
      }
    }),
  )
}
