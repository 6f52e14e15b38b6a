import { findUnits, type Unit } from '../shared/contract/units.ts'
import { OgeeError } from '../shared/errors.ts'
import type { Client } from './client.ts'

export type CurrentCodes = Unit['current'][number]
export type AskedUnit = {
  serial: string
  design: string | undefined
  channel: string | undefined
  range: string | undefined
}

/** A unit's current codes in the places asked for; good when there are some, and each has accepted codes. */
export async function askUnit(client: Pick<Client, 'call'>, asked: AskedUnit) {
  const { serial, design } = asked
  const { items } = await client.call(findUnits, { query: { serial, ...(design ? { design } : {}) } })
  const unit = theOne(items, serial)
  const current = unit.current.filter(
    ({ channel, range }) => (asked.channel ?? channel) === channel && (asked.range ?? range) === range,
  )
  return { unit, current, isGood: current.length > 0 && current.every(({ codes }) => codes !== null) }
}

export const unitDocument = (
  { design, serial }: Omit<Unit, 'current'>,
  current: readonly CurrentCodes[],
) => ({
  format: 'ogee.unit/1',
  design,
  serial,
  current,
})

/** 12 stands for: no accepted codes. */
export const noCodesExit = 12

function theOne(items: readonly Unit[], serial: string): Unit {
  const [first, ...others] = items
  if (!first) throw new OgeeError('not-found', `There is no unit ${serial}, or it is not open to this token.`)
  if (others.length === 0) return first
  const designs = items.map(({ design }) => design).join(', ')
  throw new OgeeError('not-found', `Units ${serial} stand under ${designs}: name one with --design.`)
}
