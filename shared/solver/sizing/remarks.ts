import type { FieldError } from '../../errors.ts'
import type { Trimmer } from '../adjuster.ts'
import type { AdjusterSize, SizingDesign } from './types.ts'

/**
 * What a design's author should know beside the numbers, each at the field that it is about: a node limit inside the
 * needed reach, an adjuster that the budget asks nothing of, an adjuster that is not there.
 */
export function remarksOf(
  design: SizingDesign,
  sized: readonly { trimmer: Trimmer; size: AdjusterSize }[],
): FieldError[] {
  const remarks: FieldError[] = []
  for (const { trimmer, size } of sized) {
    const { which } = trimmer
    const name = which === 'gain' ? 'gain' : 'offset'
    nodeRemark(trimmer, size, remarks)
    if (!(size.requiredHighV > size.requiredLowV)) {
      remarks.push({
        path: `/budget/${which}`,
        message: `The budget leaves the ${name} adjuster nothing to trim.`,
      })
    }
  }
  for (const which of ['gain', 'offset'] as const) {
    if (design.adjusters[which] !== undefined) continue
    const other = which === 'gain' ? 'offset' : 'gain'
    const where = other === 'gain' ? 'at the far end of the range' : 'at the offset point'
    remarks.push({
      path: '/adjusters',
      message: `This design has no ${which} adjuster. The ${other} adjuster alone nulls the error ${where}.`,
    })
  }
  return remarks
}

function nodeRemark(trimmer: Trimmer, size: AdjusterSize, remarks: FieldError[]): void {
  const { which, minV, maxV } = trimmer
  const field = `/adjusters/${which}/node`
  if (maxV < size.requiredHighV) {
    remarks.push({
      path: `${field}/maxV`,
      message: `The node may go to ${short(maxV)} V, but ${short(size.requiredHighV)} V is needed: the limit lies inside the needed reach.`,
    })
  }
  if (minV > size.requiredLowV) {
    remarks.push({
      path: `${field}/minV`,
      message: `The node may go down to ${short(minV)} V, but ${short(size.requiredLowV)} V is needed: the limit lies inside the needed reach.`,
    })
  }
}

/** Three significant digits, for sentences. */
export function short(value: number): number {
  return Number(value.toPrecision(3))
}
