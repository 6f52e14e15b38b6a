import * as z from 'zod'
import {
  channel,
  designKey,
  lotKey,
  rangeId,
  recordId,
  revisionNumber,
  serial,
} from '../../../shared/contract/primitives.ts'
import type { Applied } from '../../../shared/solver/types.ts'

/** What the address of Bench holds. Null is "not said"; anything unreadable counts as not said. */
export type BenchSearch = {
  design: string | null
  revision: number | null
  range: string | null
  channel: string | null
  unit: string | null
  lot: string | null
  applied: Applied | null
  follows: string | null
}

const asked = <T>(schema: z.ZodType<T>, text: string | null): T | null => {
  if (text === null) return null
  const parsed = schema.safeParse(text)
  return parsed.success ? parsed.data : null
}
const number = z.coerce.number().pipe(revisionNumber)

export function readSearch(params: URLSearchParams): BenchSearch {
  return {
    design: asked(designKey, params.get('design')),
    revision: asked(number, params.get('revision')),
    range: asked(rangeId, params.get('range')),
    channel: asked(channel, params.get('channel')),
    unit: asked(serial, params.get('unit')),
    lot: asked(lotKey, params.get('lot')),
    applied: readApplied(params.get('applied')),
    follows: asked(recordId, params.get('follows')),
  }
}

export function writeSearch(search: BenchSearch): URLSearchParams {
  const params = new URLSearchParams()
  for (const [name, value] of Object.entries(search)) {
    if (value === null || value === '') continue
    params.set(
      name,
      typeof value === 'object' || name === 'applied' ? appliedText(value as Applied) : String(value),
    )
  }
  return params
}

/** As on the command line: `neutral` or `gain=2593,offset=2048`. */
export function appliedText(applied: Applied): string {
  if (applied === 'neutral') return applied
  return (['gain', 'offset'] as const)
    .filter((which) => applied[which] !== undefined)
    .map((which) => `${which}=${applied[which]}`)
    .join(',')
}

export function readApplied(text: string | null): Applied | null {
  if (text === null) return null
  if (text === 'neutral') return 'neutral'
  const pair: { gain?: number; offset?: number } = {}
  for (const part of text.split(',')) {
    const [, which, code] = /^(gain|offset)=(\d{1,8})$/.exec(part) ?? []
    if (which !== 'gain' && which !== 'offset') return null
    pair[which] = Number(code)
  }
  return pair
}

export const isSameApplied = (a: Applied | null, b: Applied | null): boolean =>
  a === b || (a !== null && b !== null && appliedText(a) === appliedText(b))
