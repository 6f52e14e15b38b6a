import type { DesignLine } from '../../../shared/contract/designs.ts'

/** States of a revision are words, no shape. */
export function stateWord(state: DesignLine['revisions'][number]['state']): string {
  return state === 'in-review' ? 'in review' : state
}
