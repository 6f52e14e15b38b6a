import { OgeeError } from '../../../shared/errors.ts'
import type { LotHead } from './find-lot.ts'

export const stateWords = { open: 'open', closed: 'closed', 'signed-off': 'signed off' } as const

export function requireOpen({ state, key }: Pick<LotHead, 'state' | 'key'>): void {
  if (state !== 'open')
    throw wrongState(`Lot ${key} is ${stateWords[state]}; only an open lot expects more units.`, state)
}

export function wrongState(message: string, state: LotHead['state']): OgeeError {
  return new OgeeError('lot-state', message, { facts: { state } })
}
