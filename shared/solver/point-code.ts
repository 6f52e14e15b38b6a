import type { ErrorCode } from '../errors.ts'
import { codeOfWordText } from './coding.ts'
import { type ConverterRange, nearestCode } from './converter.ts'
import type { MeasuredPoint } from './types.ts'

/** Notes a refusal at a field of the point, and answers null. */
export type Refuse = (code: ErrorCode, field: string, message: string) => null

/** Of code, word and target several may be given; they must agree. */
export function codeOf(point: MeasuredPoint, range: ConverterRange, refuse: Refuse): number | null {
  const { code, word, target } = point
  let result: number | null = null
  if (code !== undefined) {
    if (!Number.isInteger(code) || code < 0 || code >= range.count) {
      return refuse(
        'code-out-of-range',
        'code',
        `Code ${code} does not exist: the highest is ${range.count - 1}.`,
      )
    }
    result = code
  }
  if (word !== undefined) {
    const fromWord = codeOfWordText(word, range.bits, range.coding)
    if (fromWord === null) {
      return refuse(
        'code-out-of-range',
        'word',
        `Word ${word} is not a hexadecimal word of ${range.bits} bits.`,
      )
    }
    if (result !== null && fromWord !== result) {
      return refuse(
        'code-target-disagree',
        'word',
        `Word ${word} is code ${fromWord}, but code says ${result}.`,
      )
    }
    result = fromWord
  }
  if (target !== undefined) {
    if (!Number.isFinite(target)) return refuse('not-finite', 'target', 'The target is not a finite voltage.')
    const fromTarget = nearestCode(range, target)
    if (fromTarget === null) {
      const ends = `${range.lowV} V to ${range.fullScaleV} V`
      return refuse('outside-range', 'target', `Target ${target} V lies outside the range, ${ends}.`)
    }
    if (result !== null && fromTarget !== result) {
      return refuse(
        'code-target-disagree',
        'target',
        `Target ${target} V is code ${fromTarget}, not ${result}.`,
      )
    }
    result = fromTarget
  }
  if (result === null) return refuse('point-incomplete', 'code', 'A point needs code, word or target.')
  return result
}
