import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint } from './endpoint.ts'
import { lotDetail, lotParams } from './lots.ts'
import { designKey, lotKey, note, revisionNumber, serial } from './primitives.ts'

const runs = { roles: ['engineer', 'operator'], scopes: ['trims:write'] } as const
const judges = { roles: ['engineer'], scopes: [] } as const

const serials = z.array(serial).max(limits.lotExpectedMax)

export const postLot = endpoint({
  id: 'openLot',
  method: 'POST',
  path: '/lots',
  summary: 'Open a lot of a released revision; opening the same again changes nothing',
  access: runs,
  body: z.strictObject({
    design: designKey,
    key: lotKey,
    revision: z.union([revisionNumber, z.literal('released')]).default('released'),
    expected: serials.optional(),
  }),
  reply: { status: 201, schema: lotDetail },
  refusals: [
    'not-found',
    'revision-not-released',
    'revision-withdrawn',
    'already-exists',
    'lot-state',
    'lot-expected-full',
  ],
})

export const postExpected = endpoint({
  id: 'expectUnits',
  method: 'POST',
  path: '/designs/:key/lots/:lot/expected',
  summary: 'Add serials that are expected in an open lot',
  access: runs,
  params: lotParams,
  body: z.strictObject({ serials: serials.min(1) }),
  reply: { status: 200, schema: lotDetail },
  refusals: ['not-found', 'lot-state', 'lot-expected-full'],
})

export const postClose = endpoint({
  id: 'closeLot',
  method: 'POST',
  path: '/designs/:key/lots/:lot/close',
  summary: 'Close a lot: it takes no further record; closing it again changes nothing',
  access: runs,
  params: lotParams,
  reply: { status: 200, schema: lotDetail },
  refusals: ['not-found', 'lot-state'],
})

const reason = z.string().max(limits.reasonMax)

/** `leaveOut` names units with a reason each; `rest` gives one reason for every other one that needs a decision. */
export const signOffRequest = z.strictObject({
  note: note.optional(),
  leaveOut: z
    .array(z.strictObject({ unit: serial, reason }))
    .max(limits.lotExpectedMax)
    .default([]),
  rest: z.strictObject({ reason }).optional(),
})

export const postSignOff = endpoint({
  id: 'signOffLot',
  method: 'POST',
  path: '/designs/:key/lots/:lot/sign-off',
  summary: 'Sign off a lot as it was seen; what needs a decision gets one',
  access: judges,
  params: lotParams,
  body: signOffRequest,
  conditional: true,
  reply: { status: 200, schema: lotDetail },
  refusals: ['not-found', 'lot-state', 'lot-undecided', 'lot-unit-unknown', 'reason-required'],
})

export const postReference = endpoint({
  id: 'markReference',
  method: 'POST',
  path: '/designs/:key/references',
  summary: 'Mark a unit as reference, or no longer: compared between stations, left out of yield',
  access: judges,
  params: z.strictObject({ key: designKey }),
  body: z.strictObject({ unit: serial, reference: z.boolean() }),
  reply: { status: 200, schema: z.object({ unit: serial, reference: z.boolean() }) },
  refusals: ['not-found'],
})
