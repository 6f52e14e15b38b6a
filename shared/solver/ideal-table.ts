import { OgeeError } from '../errors.ts'
import { wordText } from './coding.ts'
import { converterRange, idealV } from './converter.ts'
import type { Design } from './types.ts'

/**
 * What the meter should read at chosen codes.
 * @param codes code indexes, 0 to 2^N - 1
 * @returns code, word as sent, ideal output in volts, in the order asked
 * @throws code-out-of-range, range-required, range-unknown
 * Source: solver.md section 1.
 * @example idealTable(unipolar18, [131072])[0] // { code: 131072, word: '0x20000', idealV: 5 }
 */
export function idealTable(
  design: Design,
  codes: readonly number[],
  options: { rangeId?: string | undefined } = {},
): { code: number; word: string; idealV: number }[] {
  const range = converterRange(design, options.rangeId)
  return codes.map((code, i) => {
    if (!Number.isInteger(code) || code < 0 || code >= range.count) {
      const message = `Code ${code} does not exist: the highest is ${range.count - 1}.`
      throw new OgeeError('code-out-of-range', message, { errors: [{ path: `/codes/${i}`, message }] })
    }
    return { code, word: wordText(code, range.bits, range.coding), idealV: idealV(range, code) }
  })
}
