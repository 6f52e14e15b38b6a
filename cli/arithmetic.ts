import type { Arithmetic } from '../shared/quantity/parse.ts'
import { toTrouble } from './trouble.ts'

/**
 * The part for cells with arithmetic, which the build leaves in a file of its own. That file has its own copy of the error
 * class, so what it throws is made one of ours here.
 */
export async function loadArithmetic(): Promise<Arithmetic> {
  const { evaluateQuantity } = await import('../shared/quantity/arithmetic.ts')
  return {
    evaluateQuantity: (text, field) => {
      try {
        return evaluateQuantity(text, field)
      } catch (error) {
        throw toTrouble(error)
      }
    },
  }
}
