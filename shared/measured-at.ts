import type { RecordRequest } from './contract/record.ts'

/**
 * When a measurement was made, by the station's clock: as said, else when the last point was read.
 * @param request what is recorded
 * @returns the instant as written, or null where nothing says it
 * @example measuredAtOf({ points: [] }) // null
 */
export function measuredAtOf({
  measuredAt,
  points,
}: Pick<RecordRequest, 'measuredAt' | 'points'>): string | null {
  if (measuredAt !== undefined) return measuredAt
  const read = (points ?? []).flatMap((point) => point.readAt ?? [])
  return read.reduce<string | null>(
    (latest, at) => (latest === null || Date.parse(at) > Date.parse(latest) ? at : latest),
    null,
  )
}
