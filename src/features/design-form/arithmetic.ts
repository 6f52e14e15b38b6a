import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import type { Field } from '../../../shared/quantity/field.ts'
import { parseQuantityAsync } from '../../../shared/quantity/parse.ts'
import type { Arithmetic, Read } from './reader.ts'

const load = () => import('../../../shared/quantity/arithmetic.ts')

/**
 * Arithmetic in fields: loaded and asked for once a text. A new result makes a new function, so that fields are read again,
 * and is told.
 */
export function createArithmetic(onResult: () => void): () => Arithmetic {
  const results = new Map<string, Read | OgeeError | 'pending'>()
  const read = (text: string, field: Field) => {
    const name = `${[field.label, field.unit, ...(field.also ?? [])].join('|')}|${text}`
    const known = results.get(name)
    if (known !== undefined) return known
    results.set(name, 'pending')
    const settle = (result: Read | OgeeError) => {
      results.set(name, result)
      current = (...asked) => read(...asked)
      onResult()
    }
    parseQuantityAsync(text, field, load).then(settle, (error: unknown) =>
      settle(isOgeeError(error) ? error : new OgeeError('quantity-unreadable', `${text} cannot be read.`)),
    )
    return 'pending'
  }
  let current: Arithmetic = read
  return () => current
}
