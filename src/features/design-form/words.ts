import type { Options } from './cells.tsx'

/** Words of the form's lists. */

export const codings: Options = [
  ['straight-binary', 'straight binary'],
  ['offset-binary', 'offset binary'],
  ['twos-complement', "two's complement"],
]
export const offsetPlaces: Options = [
  ['zero-volts', '0 V'],
  ['low-end', 'low end'],
]
export const effectKinds: Options = [
  ['none', 'none'],
  ['measured', 'measured'],
  ['reference-summing', 'ref. summing'],
  ['output-summing', 'output summing'],
]
/** In a range that has none of its own the adjuster does what it does everywhere. */
export const rangeEffectKinds: Options = effectKinds.map(([kind, word]) =>
  kind === 'none' ? ['', "as the adjuster's"] : [kind, word],
)
export const networkKinds: Options = [
  ['direct', 'direct'],
  ['divider', 'divider'],
  ['shifted', 'shifted'],
]
export const signs: Options = [
  ['inverting', 'inverting'],
  ['not-inverting', 'not inverting'],
]
export const shapes: Options = [
  ['rectangular', 'rect.'],
  ['triangular', 'triang.'],
  ['arcsine', 'arcsine'],
  ['normal 1', 'normal k=1'],
  ['normal 2', 'normal k=2'],
  ['normal 3', 'normal k=3'],
  ['normal ', 'normal, other k'],
]
export const times: Options = [
  ['initial', 'initial'],
  ['drift', 'drift'],
  ['noise', 'noise'],
]
export const sums: Options = [
  ['worst-case', 'worst case'],
  ['rss', 'root sum square'],
]
export const methods: Options = [
  ['best-fit', 'best fit'],
  ['minimax', 'minimax'],
  ['terminal', 'terminal'],
]
export const rules: Options = [
  ['', 'none'],
  ['simple', 'simple'],
  ['guarded', 'guarded'],
]
