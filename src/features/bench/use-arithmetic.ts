import { useCallback, useRef, useState } from 'react'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import type { Field } from '../../../shared/quantity/field.ts'
import { parseQuantityAsync } from '../../../shared/quantity/parse.ts'
import type { Arithmetic } from './read-cells.ts'

const load = () => import('../../../shared/quantity/arithmetic.ts')

/** Arithmetic in cells: asked for once a text, and the page is drawn again when the result is there. */
export function useArithmetic(): Arithmetic {
  const results = useRef(new Map<string, number | OgeeError | 'pending'>())
  const [turn, setTurn] = useState(0)
  // biome-ignore lint/correctness/useExhaustiveDependencies: a new result is a new function, so that cells are read again
  return useCallback(
    (text: string, field: Field) => {
      const name = `${field.unit}|${text}`
      const known = results.current.get(name)
      if (known !== undefined) return known
      results.current.set(name, 'pending')
      const settle = (result: number | OgeeError) => {
        results.current.set(name, result)
        setTurn((before) => before + 1)
      }
      parseQuantityAsync(text, field, load).then(
        (read) => settle(read.value),
        (error: unknown) =>
          settle(
            isOgeeError(error) ? error : new OgeeError('quantity-unreadable', `${text} cannot be read.`),
          ),
      )
      return 'pending'
    },
    [turn],
  )
}
