import type { Network } from '../types.ts'
import type { Wanted } from './request.ts'
import { seriesValues } from './series.ts'

/** A value set in the search, by conductance, with what it is ranked by. */
export type Found = { network: Network; key: number; sourceOhm: number; topOhm: number }

/** Top and shift load the auxiliary DAC and its reference: under 1 kohm neither drives them well. */
const loaded: readonly [number, number] = [1e3, 1e6]
const bottoms: readonly [number, number] = [10, 1e7]

export type Mode = 'within' | 'any' | 'least-over'

export type Values = { top: number[]; shift: (number | null)[]; bottom: number[] }

/** The values of the series that the search tries. */
export function valuesOf({ series, kind }: Wanted): Values {
  const top = seriesValues(series, ...loaded)
  return { top, shift: kind === 'shifted' ? top : [null], bottom: seriesValues(series, ...bottoms) }
}

/**
 * The best value sets whose reach covers at every tolerance corner, by smallest corner-worst step, lower source resistance,
 * larger top. For a top and a shift the corners bound the bottom's conductance from both sides in closed form, so only
 * the largest conductances inside (the smallest steps) are looked at.
 * @param mode `within` the limits of source resistance and current; `any` without them; `least-over` ranks by how little the
 *   limits are broken
 */
export function searchNetworks(wanted: Wanted, values: Values, mode: Mode): Found[] {
  const best: Found[] = []
  for (const topOhm of values.top) {
    for (const shiftOhm of values.shift) tryBottoms(wanted, values, topOhm, shiftOhm, mode, best)
  }
  return best
}

/** Bounds of the bottom's conductance, S; an empty interval when the ends cannot both be covered. */
type Bounds = { least: number; most: number }

/** Every value may lie this much to either side: the reach must hold at all of them (solver.md section 7). */
function boundsOf(wanted: Wanted, topS: number, shiftS: number, mode: Mode): Bounds {
  const { tolerance: t } = wanted
  const bounds: Bounds = { least: 0, most: Number.POSITIVE_INFINITY }
  const corners = t === 0 ? 1 : 2
  for (let i = 0; i < corners; i++) {
    const top = corners === 1 ? topS : topS / (i === 0 ? 1 - t : 1 + t)
    for (let j = 0; j < (shiftS === 0 ? 1 : corners); j++) {
      const shift = corners === 1 ? shiftS : shiftS / (j === 0 ? 1 - t : 1 + t)
      const rest = wanted.shiftV * shift + wanted.returnA
      const sum = top + shift + wanted.inputS
      bound(bounds, -wanted.low, -(wanted.auxLow * top + rest), sum, t)
      bound(bounds, wanted.high, wanted.auxHigh * top + rest, sum, t)
    }
  }
  if (mode === 'within') bounds.least = Math.max(bounds.least, 1 / wanted.maxSourceOhm - topS - shiftS)
  return bounds
}

/** current/(sum + bottom) >= end, for the bottom's conductance at its own corners. */
function bound(bounds: Bounds, end: number, current: number, sum: number, t: number): void {
  const wanted = end * (end > 0 ? 1 - 1e-9 : 1 + 1e-9)
  if (wanted > 0) bounds.most = Math.min(bounds.most, (current / wanted - sum) * (1 - t))
  else if (wanted < 0) bounds.least = Math.max(bounds.least, (current / wanted - sum) * (1 + t))
  else if (current < 0) bounds.most = -1
}

function tryBottoms(
  wanted: Wanted,
  { bottom }: Values,
  topOhm: number,
  shiftOhm: number | null,
  mode: Mode,
  best: Found[],
): void {
  const topS = 1 / topOhm
  const shiftS = shiftOhm === null ? 0 : 1 / shiftOhm
  const { least, most } = boundsOf(wanted, topS, shiftS, mode)
  if (!(most >= least) || most < 0) return
  const worst = best.length < wanted.count ? Number.POSITIVE_INFINITY : best[best.length - 1]!.key
  if (mode !== 'least-over' && keyOf(wanted, topS, shiftS, most) > worst) return
  let left = wanted.count
  for (let i = firstNotUnder(bottom, 1 / most); i < bottom.length && left > 0; i++, left--) {
    const bottomS = 1 / bottom[i]!
    if (bottomS < least) break
    consider(wanted, topOhm, shiftOhm, bottom[i]!, mode, best)
  }
  if (shiftOhm !== null && left > 0 && least <= 0) consider(wanted, topOhm, shiftOhm, null, mode, best)
}

/** The corner-worst step in whole 1e-12 of the auxiliary step: equal but for rounding counts as equal. */
function keyOf({ tolerance: t, inputS }: Wanted, topS: number, shiftS: number, bottomS: number): number {
  const top = topS / (1 - t)
  const rest = (shiftS + bottomS) / (1 + t) + inputS
  return rest === Number.POSITIVE_INFINITY ? 0 : Math.floor((top / (top + rest)) * 1e12 + 0.5)
}

function consider(
  wanted: Wanted,
  topOhm: number,
  shiftOhm: number | null,
  bottomOhm: number | null,
  mode: Mode,
  best: Found[],
): void {
  const topS = 1 / topOhm
  const shiftS = shiftOhm === null ? 0 : 1 / shiftOhm
  const bottomS = bottomOhm === null ? 0 : 1 / bottomOhm
  const current = mode === 'any' ? 0 : currentOf(wanted, topS, shiftS, bottomS)
  if (mode === 'within' && current > wanted.maxCurrentA) return
  const sourceOhm = 1 / (topS + shiftS + bottomS)
  const over = Math.max(sourceOhm / wanted.maxSourceOhm, current / wanted.maxCurrentA)
  const found: Found = {
    network: networkOf(wanted, topOhm, shiftOhm, bottomOhm),
    key: mode === 'least-over' ? over : keyOf(wanted, topS, shiftS, bottomS),
    sourceOhm,
    topOhm,
  }
  let at = best.length
  while (at > 0 && isBetter(found, best[at - 1]!)) at -= 1
  if (at >= wanted.count) return
  best.splice(at, 0, found)
  if (best.length > wanted.count) best.pop()
}

function isBetter(a: Found, b: Found): boolean {
  return (a.key - b.key || sourceOrder(a, b) || b.topOhm - a.topOhm) < 0
}

/** Source resistances that differ by rounding alone are equal. */
function sourceOrder(a: Found, b: Found): number {
  const difference = a.sourceOhm - b.sourceOhm
  return Math.abs(difference) <= 1e-12 * b.sourceOhm ? 0 : difference
}

/** Largest current from the auxiliary DAC over its codes, at nominal values. */
export function currentOf(wanted: Wanted, topS: number, shiftS: number, bottomS: number): number {
  const sum = topS + shiftS + bottomS + wanted.inputS
  const rest = wanted.shiftV * shiftS + wanted.returnA
  const at = (aux: number) => Math.abs(aux - (aux * topS + rest) / sum) * topS
  return Math.max(at(wanted.auxLow), at(wanted.auxHigh))
}

export function networkOf(
  { shiftV }: Wanted,
  topOhm: number,
  shiftOhm: number | null,
  bottomOhm: number | null,
): Network {
  if (shiftOhm === null) return { kind: 'divider', topOhm, bottomOhm: bottomOhm ?? Number.POSITIVE_INFINITY }
  if (bottomOhm === null) return { kind: 'shifted', topOhm, shiftOhm, shiftV }
  return { kind: 'shifted', topOhm, shiftOhm, shiftV, bottomOhm }
}

/** Index of the first value that is not under a bound; the length when all are. */
function firstNotUnder(values: readonly number[], least: number): number {
  let low = 0
  let high = values.length
  while (low < high) {
    const middle = (low + high) >> 1
    if (values[middle]! < least) low = middle + 1
    else high = middle
  }
  return low
}
