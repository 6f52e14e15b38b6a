import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { instant, plainText } from './primitives.ts'

const stationName = plainText(limits.stationNameMax)

export const station = z
  .object({ id: z.uuid(), name: z.string(), createdAt: instant, retiredAt: instant.nullable() })
  .meta({ id: 'Station' })
export type Station = z.output<typeof station>

const keeps = { roles: ['administrator'], scopes: [] } as const

export const listStations = endpoint({
  id: 'listStations',
  method: 'GET',
  path: '/stations',
  summary: 'Stations by name, retired ones last',
  access: { roles: everyRole, scopes: [] },
  reply: { status: 200, schema: z.object({ items: z.array(station) }) },
  refusals: [],
})

export const postStation = endpoint({
  id: 'createStation',
  method: 'POST',
  path: '/stations',
  summary: 'Name a station',
  access: keeps,
  body: z.strictObject({ name: stationName }),
  reply: { status: 201, schema: station },
  refusals: ['already-exists'],
})

export const patchStation = endpoint({
  id: 'changeStation',
  method: 'PATCH',
  path: '/stations/:id',
  summary: 'Rename a station, or retire it: its tokens end with it',
  access: keeps,
  params: z.strictObject({ id: z.uuid() }),
  body: z.strictObject({ name: stationName.optional(), retired: z.literal(true).optional() }),
  reply: { status: 200, schema: station },
  refusals: ['not-found', 'already-exists', 'station-retired'],
})
