import { listLots } from '../shared/contract/lots.ts'
import { OgeeError } from '../shared/errors.ts'
import type { Client } from './client.ts'

/** A lot belongs to one design; where two designs have a lot of that name, --design says which. */
export async function designOfLot(client: Pick<Client, 'call'>, lot: string): Promise<string> {
  const { items } = await client.call(listLots, { query: { key: lot } })
  const designs = [...new Set(items.filter(({ key }) => key === lot).map(({ design }) => design))]
  const [first, ...others] = designs
  if (first === undefined) {
    throw new OgeeError('lot-unknown', `There is no lot ${lot}, or it is not open to this token.`)
  }
  if (others.length === 0) return first
  throw new OgeeError('lot-unknown', `Lot ${lot} stands under ${designs.join(', ')}: name one with --design.`)
}
