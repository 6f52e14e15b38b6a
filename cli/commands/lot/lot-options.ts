import { designKey, lotKey } from '../../../shared/contract/primitives.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Client } from '../../client.ts'
import type { ArgumentSpec, Given, OptionSpec } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { designOfLot } from '../../design-of-lot.ts'
import { text } from '../../option-values.ts'
import { readConnection } from '../../server-options.ts'

/** Which lot: its key, and the design where two have a lot of that name. */
export type LotOptions = ConnectionOptions & { lot: string; design: string | undefined }

export const lotArgument: ArgumentSpec = { name: '<lot>', says: 'key of the lot' }
export const designOption: OptionSpec = {
  flags: '--design <key>',
  says: 'design, where lots of several have that key',
}

export function readLotOptions(given: Given): LotOptions {
  const { options, args } = given
  const lot = args[0] ?? ''
  const design = text(options.design)
  if (!lotKey.safeParse(lot).success) {
    throw new OgeeError('usage', 'A lot has a key of up to 32 letters, digits, dots, dashes and underscores.')
  }
  if (design !== undefined && !designKey.safeParse(design).success) {
    throw new OgeeError('usage', `${design} cannot be the key of a design.`)
  }
  return { ...readConnection(given), lot, design }
}

export async function lotParamsOf(client: Client, { lot, design }: LotOptions) {
  return { key: design ?? (await designOfLot(client, lot)), lot }
}
