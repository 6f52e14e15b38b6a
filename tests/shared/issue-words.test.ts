import { expect, test } from 'vitest'
import * as z from 'zod'
import { designDocument } from '../../shared/contract/design.ts'
import { issueWords } from '../../shared/contract/issue-words.ts'
import { recordRequest } from '../../shared/contract/record.ts'
import { exampleDesign } from '../support/solver-fixtures.ts'

/** What our schemas refuse, said in our own sentences and never in those of the library. */

const said = (schema: z.ZodType, value: unknown): string[] =>
  schema.safeParse(value, { error: issueWords }).error?.issues.map((issue) => issue.message) ?? []

test('each kind of breach has a sentence that says what to give', () => {
  expect(said(z.number(), undefined)).toEqual(['It is missing.'])
  expect(said(z.number(), '5')).toEqual(['Give a number.'])
  expect(said(z.int(), 1.5)).toEqual(['Give a whole number.'])
  expect(said(z.number().positive(), 0)).toEqual(['It must be over 0.'])
  expect(said(z.number().lt(1), 1)).toEqual(['It must be under 1.'])
  expect(said(z.int().min(4).max(24), 3)).toEqual(['It must be 4 or more.'])
  expect(said(z.int().min(4).max(24), 25)).toEqual(['It must be 24 or less.'])
  expect(said(z.string().max(3), 'abcd')).toEqual(['At most 3 characters.'])
  expect(said(z.array(z.int()).min(2), [1])).toEqual(['At least 2 entries.'])
  expect(said(z.enum(['a', 'b']), 'c')).toEqual(['Give one of a, b.'])
  expect(said(z.literal('a'), 'c')).toEqual(['It must be a.'])
  expect(said(z.uuid(), 'x')[0]).toMatch(/^Give an id such as /)
  expect(said(z.union([z.literal('a'), z.int()]), {})).toEqual(['It has none of the forms that are taken.'])
})

test('a sentence that a schema has for itself goes before', () => {
  expect(said(z.string().min(1, 'Unit is missing.'), '')).toEqual(['Unit is missing.'])
})

test('no word of the library is left in what a design or a request is told', () => {
  const { gain } = exampleDesign('unipolar-18').adjusters
  const bad = [
    {},
    {
      format: 'x',
      title: 5,
      converter: { bits: 3.5, coding: 'x', inlLsb: -1 },
      ranges: [],
      adjusters: { gain: 5 },
    },
    {
      adjusters: { gain: { ...gain, network: { kind: 'x' }, effectTolerance: 2, node: { nominalV: null } } },
    },
  ]
  const messages = [
    ...bad.flatMap((document) => said(designDocument, document)),
    ...said(recordRequest, {
      kind: 'x',
      unit: '',
      points: [{ code: -1, measured: 'a', readAt: 'now' }],
      applied: 7,
    }),
  ]
  expect(messages.length).toBeGreaterThan(25)
  expect(messages.filter((message) => /Invalid|expected|Too (small|big)|received/.test(message))).toEqual([])
})
