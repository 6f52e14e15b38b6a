import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { designDocument } from '../../../shared/contract/design.ts'
import { type Ladder, ladderOf } from '../../../shared/solver/sizing/ladder.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { AuxSource, Network } from '../../../shared/solver/types.ts'

/** The design of the pictures, and the same with other bits and resistors: the four states of its gain ladder. */
const file = join(import.meta.dirname, '..', '..', 'vectors', 'examples', 'unipolar-18.design.json')
export const unipolar: SizingDesign = designDocument.parse(JSON.parse(readFileSync(file, 'utf8')))

export function withGain(source: Partial<AuxSource>, network?: Network): SizingDesign {
  const gain = unipolar.adjusters.gain!
  return {
    ...unipolar,
    adjusters: {
      ...unipolar.adjusters,
      gain: { ...gain, source: { ...gain.source, ...source }, network: network ?? gain.network },
    },
  }
}

const divider = (bottomOhm: number): Network => ({ kind: 'divider', topOhm: 8660, bottomOhm })
export const states = {
  covers: unipolar,
  short: withGain({}, divider(330)),
  coarse: withGain({ bits: 8 }),
  both: withGain({ bits: 8 }, divider(1000)),
} as const

export const scale = { lsbV: 10 / 2 ** 18, fsrV: 10 }

export function laddersOf(design: SizingDesign): Ladder[] {
  const size = sizeDesign(design)
  return (['gain', 'offset'] as const).flatMap((which) => ladderOf(size, which, scale.fsrV) ?? [])
}
