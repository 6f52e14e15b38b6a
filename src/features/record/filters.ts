import { designKey, outcome, serial, verdict } from '../../../shared/contract/primitives.ts'
import { type Kind, kind, type RecordLine } from '../../../shared/contract/record.ts'

/** What History can be narrowed to, exactly as it stands in the address. */
export type Filters = {
  unit?: string
  design?: string
  kind?: Kind
  verdict?: NonNullable<RecordLine['verdict']>
}

const known = { unit: serial, design: designKey, kind, verdict: verdict.or(outcome) }
export const filterNames = ['unit', 'design', 'kind', 'verdict'] as const

/** Reads the filters of an address; what is no filter value is left out. */
export function readFilters(search: URLSearchParams): Filters {
  const filters: { [K in keyof Filters]: unknown } = {}
  for (const name of filterNames) {
    const read = known[name].safeParse(search.get(name) ?? undefined)
    if (read.success) filters[name] = read.data
  }
  return filters as Filters
}

/** An address with one filter changed; the page starts again at the newest record. */
export function withFilter(search: URLSearchParams, name: keyof Filters, value: string): URLSearchParams {
  const next = new URLSearchParams(search)
  next.delete('after')
  if (value === '') next.delete(name)
  else next.set(name, value)
  return next
}

export const verdictChoices = [...verdict.options, ...outcome.options] as const
export const kindChoices = kind.options
