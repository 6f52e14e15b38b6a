import { expect, test } from 'vitest'
import type * as z from 'zod'
import { designLine, revision } from '../../shared/contract/designs.ts'
import { instrument } from '../../shared/contract/instruments.ts'
import { record, recordLine } from '../../shared/contract/record.ts'
import { me } from '../../shared/contract/session.ts'
import { station } from '../../shared/contract/stations.ts'
import { postToken, token } from '../../shared/contract/tokens.ts'
import * as fixtures from '../support/web-fixtures.ts'
import * as results from '../support/web-results.ts'

const cases: [string, z.ZodType, unknown][] = [
  ['me', me, fixtures.me('auditor')],
  ['design line', designLine, fixtures.designLine],
  ['revision', revision, fixtures.revision(1)],
  ['record with codes', record, fixtures.record(1)],
  ['suspect record', record, fixtures.record(2, { result: results.suspectResult, verdict: 'suspect' })],
  ['record out of reach', record, fixtures.record(3, { result: results.outOfReachResult })],
  ['verification', record, fixtures.record(4, { kind: 'verify', result: results.verifyResult })],
  ['new token', postToken.reply.schema, { ...fixtures.tokens[0], token: fixtures.tokenText }],
  ...fixtures.stations.map((one): [string, z.ZodType, unknown] => [one.name, station, one]),
  ...fixtures.instruments.map((one): [string, z.ZodType, unknown] => [one.id, instrument, one]),
  ...fixtures.tokens.map((one): [string, z.ZodType, unknown] => [one.name, token, one]),
  ...[1, 4, 5].map((n): [string, z.ZodType, unknown] => [`line ${n}`, recordLine, fixtures.recordLine(n)]),
]

test.each(cases)('%s is as the contract says', (_, schema, value) => {
  expect(schema.safeParse(value).error?.issues ?? []).toEqual([])
})
