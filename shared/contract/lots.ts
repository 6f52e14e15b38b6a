import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { lotCounts, lotPlace, standing } from './lot-standing.ts'
import {
  designKey,
  instant,
  lotKey,
  page,
  pageQuery,
  revisionNumber,
  serial,
  sha256Hex,
} from './primitives.ts'

export const lotState = z.enum(['open', 'closed', 'signed-off'])

const signOffLine = z.object({ by: z.string(), at: instant, note: z.string().nullable() })

/** A lot as lists show it. Names are as they were then. */
export const lot = z
  .object({
    key: z.string().max(limits.lotKeyMax),
    design: designKey,
    revision: revisionNumber,
    state: lotState,
    openedAt: instant,
    openedBy: z.string().nullable().describe('Null where it was not kept yet'),
    closedAt: instant.nullable(),
    closedBy: z.string().nullable(),
    signedOff: signOffLine.nullable(),
    records: z.int().nonnegative().describe('Records of any kind that name this lot'),
    expected: z.int().nonnegative().nullable().describe('Serials expected; null where nobody said'),
    firstAt: instant.nullable(),
    lastAt: instant.nullable(),
    counts: lotCounts.nullable().describe('Null: not counted yet, ask again'),
  })
  .meta({ id: 'Lot' })
export type Lot = z.output<typeof lot>

/** What an engineer decided when signing off: units that do not leave with the lot, each with a reason. */
export const leftOut = z.object({ unit: serial, reason: z.string() })

export const lotDetail = lot
  .extend({
    revisionState: z.enum(['released', 'withdrawn']),
    counts: lotCounts,
    references: z
      .array(serial)
      .describe(
        'Reference units of the design that were measured in this lot; empty for who reads no single units',
      ),
    signOff: z
      .object({ counts: lotCounts, leftOut: z.array(leftOut), leaf: sha256Hex })
      .nullable()
      .describe(
        'As it was signed; what was recorded since stands outside of it. leftOut is empty for who reads no single units',
      ),
    etag: z.string().describe('What If-Match takes, quotes included; another one after every record'),
  })
  .meta({ id: 'LotDetail' })
export type LotDetail = z.output<typeof lotDetail>

/** A unit in a lot with everything that the lot page draws of it. */
export const lotUnit = z
  .object({
    unit: serial,
    reference: z.boolean(),
    expected: z.boolean(),
    standing,
    records: z.int().nonnegative(),
    places: z.array(lotPlace),
  })
  .meta({ id: 'LotUnit' })
export type LotUnit = z.output<typeof lotUnit>

/** A lot is named by its design and its key: keys are unique for a design. */
export const lotParams = z.strictObject({ key: designKey, lot: lotKey })

const readsCounts = { roles: everyRole, scopes: ['trims:read', 'trims:read-all', 'trims:write'] } as const
/** What single units read as, whichever station measured them. */
const readsUnits = { roles: everyRole, scopes: ['trims:read-all'] } as const

export const listLots = endpoint({
  id: 'listLots',
  method: 'GET',
  path: '/lots',
  summary: 'Lots, newest first',
  access: readsCounts,
  query: z.strictObject({
    design: designKey.optional(),
    key: lotKey.optional(),
    state: lotState.optional(),
    ...pageQuery,
  }),
  reply: { status: 200, schema: page(lot) },
  refusals: [],
})

export const getLot = endpoint({
  id: 'readLot',
  method: 'GET',
  path: '/designs/:key/lots/:lot',
  summary: 'One lot with its yield',
  access: readsCounts,
  params: lotParams,
  reply: { status: 200, schema: lotDetail },
  refusals: ['not-found'],
})

/**
 * Pages follow `next`. `since` asks only for units that changed: pass what an earlier reply gave as `newest`. The numbers of
 * records add up to `records` when nothing was missed; where they do not, a late record slipped in: read all again.
 */
export const listLotUnits = endpoint({
  id: 'listLotUnits',
  method: 'GET',
  path: '/designs/:key/lots/:lot/units',
  summary: 'Units of a lot: as found, codes, as left, standing',
  access: readsUnits,
  params: lotParams,
  query: z.strictObject({
    after: pageQuery.after,
    since: z.coerce.number().int().nonnegative().max(Number.MAX_SAFE_INTEGER).optional(),
    limit: pageQuery.limit,
  }),
  reply: {
    status: 200,
    schema: page(lotUnit).extend({
      newest: z.int().nonnegative().describe('What since takes next time'),
      records: z.int().nonnegative().describe('Records of the lot at this moment'),
    }),
  },
  refusals: ['not-found'],
})

export const listMissing = endpoint({
  id: 'listMissing',
  method: 'GET',
  path: '/designs/:key/lots/:lot/missing',
  summary: 'Serials that are expected in a lot and not recorded',
  access: readsUnits,
  params: lotParams,
  query: z.strictObject(pageQuery),
  reply: { status: 200, schema: page(serial) },
  refusals: ['not-found'],
})

/** One month of one station. `unit` is a reference unit, or null for units as found from unit to unit. */
export const stationMonth = z.object({
  station: z.string(),
  month: z.string().regex(/^\d{4}-\d\d$/),
  unit: serial.nullable(),
  channel: z.string(),
  range: z.string(),
  n: z.int().positive(),
  gainMeanPpm: z.number(),
  gainS: z.number().nullable().describe('ppm; null with one record'),
  offsetMeanV: z.number(),
  offsetS: z.number().nullable().describe('V; null with one record'),
})
export type StationMonth = z.output<typeof stationMonth>

export const listStationMonths = endpoint({
  id: 'compareStations',
  method: 'GET',
  path: '/designs/:key/stations',
  summary: 'What each station read of a design by month: reference units, and units of lots as found',
  access: readsUnits,
  params: z.strictObject({ key: designKey }),
  query: z.strictObject({ to: instant.optional().describe('The year before this moment; now if left out') }),
  reply: { status: 200, schema: z.object({ items: z.array(stationMonth) }) },
  refusals: ['not-found'],
})
