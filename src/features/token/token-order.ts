import { type Scope, scope } from '../../../shared/contract/primitives.ts'
import { limits } from '../../../shared/limits.ts'
import type { TokenOrder } from './queries.ts'

/** What the form holds: text as typed. */
export type OrderForm = {
  name: string
  station: string
  scopes: readonly Scope[]
  days: string
  designs: readonly string[]
}

export const emptyOrder: OrderForm = {
  name: '',
  station: '',
  scopes: ['trims:write', 'trims:read', 'designs:read'],
  days: String(limits.tokenDaysDefault),
  designs: [],
}

export const scopeWords: Record<Scope, string> = {
  'designs:read': 'read designs',
  'designs:write': 'write drafts of designs, submit them; never release',
  'trims:write': 'record trims and verifications (needs a station)',
  'trims:read': "read its own station's records",
  'trims:read-all': "read every station's records",
  'ledger:read': 'read the ledger',
}

export type OrderTrouble = { name?: string; station?: string; scopes?: string; days?: string }

/** What stands in the way, each at its field. */
export function orderTrouble(form: OrderForm): OrderTrouble {
  const trouble: OrderTrouble = {}
  if (form.name.trim() === '') trouble.name = 'Name is missing.'
  if (form.scopes.length === 0) trouble.scopes = 'Choose at least one scope.'
  if (form.scopes.includes('trims:write') && form.station === '') {
    trouble.station = 'Recording needs a station.'
  }
  const days = Number(form.days)
  if (!/^\d+$/.test(form.days.trim()) || days < 1 || days > limits.tokenDaysMax) {
    trouble.days = `Give whole days, 1 to ${limits.tokenDaysMax}.`
  }
  return trouble
}

export function orderOf(form: OrderForm): TokenOrder {
  return {
    name: form.name.trim(),
    station: form.station === '' ? null : form.station,
    scopes: scope.options.filter((one) => form.scopes.includes(one)),
    days: Number(form.days),
    designs: form.designs.length === 0 ? null : [...form.designs],
  }
}
