import { recordFilters } from '../../../shared/contract/history.ts'
import { outcome, verdict } from '../../../shared/contract/primitives.ts'
import { kind } from '../../../shared/contract/record.ts'

export type FilterName = keyof typeof recordFilters
/** What History is narrowed to, exactly as it stands in the address: the address is the saved view. */
export type Filters = { [Name in FilterName]?: string }

export const filterNames = Object.keys(recordFilters) as FilterName[]

/** Reads the filters of an address; what is no filter value is left out. */
export function readFilters(search: URLSearchParams): Filters {
  const filters: Filters = {}
  for (const name of filterNames) {
    const value = search.get(name)
    if (value !== null && isFilterValue(name, value)) filters[name] = value
  }
  return filters
}

export const isFilterValue = (name: FilterName, value: string): boolean =>
  recordFilters[name].safeParse(value).success

/** An address with some filters changed, empty ones taken away; the page starts again at the newest record. */
export function withFilters(search: URLSearchParams, change: Filters): URLSearchParams {
  const next = new URLSearchParams(search)
  next.delete('after')
  for (const [name, value] of Object.entries(change)) {
    if (value === '') next.delete(name)
    else next.set(name, value)
  }
  // A revision is one of a design.
  if (!next.has('design') || next.get('design')?.includes(',')) next.delete('revision')
  return next
}

export const verdictChoices = [...verdict.options, ...outcome.options] as const
export const kindChoices = kind.options
/** From how many measurements of a unit on one day it is worth a look. */
export const attemptChoices = ['2', '3', '5', '10'] as const
