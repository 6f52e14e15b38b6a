import type { Unit } from '../../../shared/contract/units.ts'

export type CurrentCodes = Unit['current'][number]

/** What is known of a channel and range of a unit; null for one that was never measured. */
export const currentOf = (
  unit: Unit | null | undefined,
  channel: string,
  range: string,
): CurrentCodes | null => unit?.current.find((one) => one.channel === channel && one.range === range) ?? null
