import type { Design } from '../contract/design.ts'
import type { DesignDifference } from '../contract/revisions.ts'
import { changesBetween } from './changes.ts'
import { effectsOf } from './effects.ts'

/**
 * What changed from one design to another, in words and numbers, and what that does to the answer.
 * @param before @param after designs as the schema gives them, defaults filled in: a default that is written out and one
 *   that is not are the same
 * @returns `ogee.difference/1`: no changes when both say the same, whatever the order of ranges and budget lines
 * @example diffDesigns(design, design).changes // []
 */
export function diffDesigns(before: Design, after: Design): DesignDifference {
  return {
    format: 'ogee.difference/1',
    changes: changesBetween(before, after),
    effects: effectsOf(before, after),
  }
}
