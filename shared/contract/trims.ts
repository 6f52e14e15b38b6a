import * as z from 'zod'
import { endpoint, everyRole } from './endpoint.ts'
import { recordFilters } from './history.ts'
import { page, pageQuery, recordId } from './primitives.ts'
import { record, recordLine, recordRequest } from './record.ts'

/** Records one measurement: solved again here, stored with its leaf and receipt, all or nothing. */
export const postTrim = endpoint({
  id: 'recordTrim',
  method: 'POST',
  path: '/trims',
  summary: 'Record a trim, an override or a withdrawal',
  access: { roles: ['engineer', 'operator'], scopes: ['trims:write'] },
  body: recordRequest,
  idempotent: true,
  reply: { status: 201, schema: record },
  refusals: [
    'not-found',
    'revision-not-released',
    'revision-withdrawn',
    'channel-required',
    'channel-unknown',
    'range-required',
    'range-unknown',
    'lot-unknown',
    'lot-closed',
    'applied-required',
    'applied-unknown',
    'follows-unknown',
    'reason-required',
    'override-needs-a-person',
    'override-not-suspect',
    'already-withdrawn',
    'instrument-unknown',
    'instrument-retired',
    'instrument-overdue',
    'kind-not-served',
    'too-few-codes',
    'not-finite',
    'uncertainty-not-positive',
    'code-out-of-range',
    'code-target-disagree',
    'outside-range',
    'implausible-point',
    'adjusters-not-independent',
    'adjuster-without-effect',
    'effect-zero',
    'no-adjuster',
    'idempotency-key-missing',
    'idempotency-key-reused',
    'idempotency-in-flight',
  ],
})

export const listTrims = endpoint({
  id: 'listRecords',
  method: 'GET',
  path: '/trims',
  summary: 'Records, newest first',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all'] },
  query: z.strictObject({ ...recordFilters, ...pageQuery }),
  reply: { status: 200, schema: page(recordLine) },
  refusals: [],
})

export const getTrim = endpoint({
  id: 'readRecord',
  method: 'GET',
  path: '/trims/:id',
  summary: 'One record with its receipt and its place in the ledger',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all'] },
  params: z.strictObject({ id: recordId }),
  reply: { status: 200, schema: record },
  refusals: ['not-found'],
})

/** Of the unit, channel and range as of this record: for paper, with the proofs inside. */
export const getCertificate = endpoint({
  id: 'readCertificate',
  method: 'GET',
  path: '/trims/:id/certificate',
  summary: 'Certificate of the unit as of this record, as PDF with its proofs attached',
  access: { roles: everyRole, scopes: ['trims:read', 'trims:read-all'] },
  params: z.strictObject({ id: recordId }),
  reply: { status: 200, schema: z.string(), mediaType: 'application/pdf' },
  refusals: ['not-found', 'not-in-ledger-yet'],
})
