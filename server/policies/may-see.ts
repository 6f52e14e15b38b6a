import { OgeeError } from '../../shared/errors.ts'
import type { Principal } from '../http/principal.ts'

/** What a principal may see of records: everything, or one station's; of every design, or of some. */
export type Sight = { station: 'all' | string | null; designs: readonly string[] | null }

export function sightOf(principal: Principal): Sight {
  if (principal.kind === 'person') return { station: 'all', designs: null }
  const all = principal.scopes.includes('trims:read-all')
  return { station: all ? 'all' : (principal.station?.id ?? null), designs: principal.designs }
}

export function maySeeRecord(
  principal: Principal,
  record: { stationId: string | null; design: string },
): boolean {
  const sight = sightOf(principal)
  const station = sight.station === 'all' || (sight.station !== null && sight.station === record.stationId)
  return station && maySeeDesign(principal, record.design)
}

/** Single units of a lot, whichever station measured them; others see a lot's counts. */
export const maySeeUnits = (principal: Principal): boolean => sightOf(principal).station === 'all'

/** Who reads the ledger reads every record in it; a token's designs bound that too. */
export function mayProveRecord(
  principal: Principal,
  record: { stationId: string | null; design: string },
): boolean {
  const reads = principal.kind === 'token' && principal.scopes.includes('ledger:read')
  return reads ? maySeeDesign(principal, record.design) : maySeeRecord(principal, record)
}

export function maySeeDesign(principal: Principal, design: string): boolean {
  return principal.kind === 'person' || principal.designs === null || principal.designs.includes(design)
}

export function requireDesign(principal: Principal, design: string): void {
  if (!maySeeDesign(principal, design)) throw designNotOpen()
}

/** The whole ledger holds records of every design. */
export function requireEveryDesign(principal: Principal): void {
  if (principal.kind === 'person' || principal.designs === null) return
  const { length } = principal.designs
  throw new OgeeError(
    'insufficient-scope',
    `The token is for ${length === 1 ? 'one design' : `${length} designs`} only. The whole ledger needs one for every design.`,
    { facts: { scope: 'ledger:read' } },
  )
}

/** The same for what is not there and what is not open, so that neither can be told from the other. */
export const designNotOpen = () =>
  new OgeeError('not-found', 'There is no such design or revision, or it is not open to you.')
