import { useCallback, useRef, useState } from 'react'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import type { Field } from '../../../shared/quantity/field.ts'
import { parseQuantityAsync } from '../../../shared/quantity/parse.ts'
import type { Arithmetic, Read } from './reader.ts'

const load = () => import('../../../shared/quantity/arithmetic.ts')

/** Arithmetic in fields: loaded and asked for once a text; a new result makes a new function, so that fields are read again. */
export function useArithmetic(): Arithmetic {
  const results = useRef(new Map<string, Read | OgeeError | 'pending'>())
  const [turn, setTurn] = useState(0)
  // biome-ignore lint/correctness/useExhaustiveDependencies: the turn is what makes the function a new one
  return useCallback(
    (text: string, field: Field) => {
      const name = `${[field.label, field.unit, ...(field.also ?? [])].join('|')}|${text}`
      const known = results.current.get(name)
      if (known !== undefined) return known
      results.current.set(name, 'pending')
      const settle = (result: Read | OgeeError) => {
        results.current.set(name, result)
        setTurn((before) => before + 1)
      }
      parseQuantityAsync(text, field, load).then(settle, (error: unknown) =>
        settle(isOgeeError(error) ? error : new OgeeError('quantity-unreadable', `${text} cannot be read.`)),
      )
      return 'pending'
    },
    [turn],
  )
}
