import fc from 'fast-check'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openLot } from '../../server/commands/lots/open-lot.ts'
import { allEndpoints } from '../../shared/contract/all-endpoints.ts'
import { runSeed } from '../support/random.ts'
import { newKey, signIn } from '../support/server-client.ts'
import { trimBody, unipolar } from '../support/server-factories.ts'
import {
  addDesign,
  addPerson,
  addStation,
  addToken,
  type Harness,
  serverHarness,
} from '../support/server-harness.ts'

type Operation = {
  operationId: string
  parameters: { name: string; in: string; required: boolean }[]
  requestBody?: { content: Record<string, { schema: { $ref?: string } }> }
  responses: Record<string, unknown>
}
type Document = {
  openapi: string
  paths: Record<string, Record<string, Operation>>
  components: { schemas: Record<string, object> }
}

let harness: Harness
let document: Document
let cookies: string[]
let tokens: string[]

beforeAll(async () => {
  harness = await serverHarness({
    quotas: { failedSignInsPerAccountAndAddress: 1e9, failedSignInsPerAddress: 1e9 },
  })
  await addDesign(harness, 'U18')
  await openLot(harness.deps, { design: 'U18', key: 'FUZZ', revision: 1, by: 'tests' })
  for (const role of ['administrator', 'engineer', 'operator', 'auditor'] as const)
    await addPerson(harness, role)
  cookies = await Promise.all(
    ['administrator', 'engineer', 'operator', 'auditor'].map((role) =>
      signIn(harness.url, `${role}@example.org`),
    ),
  )
  const station = await addStation(harness, 'Station A')
  tokens = [
    (await addToken(harness, ['trims:write', 'trims:read', 'designs:write'], station.id)).token,
    (await addToken(harness, ['designs:read', 'trims:read-all'])).token,
  ]
  document = (await request(harness.url).get('/api/v1/openapi.json')).body as Document
})
afterAll(() => harness.close())

const operations = () =>
  Object.entries(document.paths).flatMap(([path, verbs]) =>
    Object.entries(verbs).map(([verb, operation]) => ({ path, verb, operation })),
  )

describe('the OpenAPI document', () => {
  it('has every endpoint once, and every reference leads somewhere', () => {
    expect(document.openapi).toBe('3.1.0')
    expect(
      operations()
        .map((one) => one.operation.operationId)
        .sort(),
    ).toEqual(allEndpoints.map((endpoint) => endpoint.id).sort())
    const text = JSON.stringify(document)
    const references = [...text.matchAll(/"\$ref":"#\/components\/schemas\/([^"]+)"/g)].map(
      (match) => match[1]!,
    )
    expect(references.length).toBeGreaterThan(20)
    for (const reference of references)
      expect(document.components.schemas, reference).toHaveProperty(reference)
    expect(text).not.toContain('$defs')
  })

  it('closes what is sent to us and leaves open what we send', () => {
    expect(document.components.schemas.RecordRequestInput).toMatchObject({ additionalProperties: false })
    expect(document.components.schemas.Record).not.toHaveProperty('additionalProperties')
  })

  it('says that a block and its answer are lines', () => {
    const post = document.paths['/batches']!.post! as Operation & { responses: Record<string, unknown> }
    const type = 'application/x-ndjson'
    expect(post.requestBody?.content[type]?.schema).toEqual({ $ref: '#/components/schemas/BatchLineInput' })
    expect(post.responses[200]).toMatchObject({
      content: { [type]: { schema: { $ref: '#/components/schemas/BatchAnswer' } } },
    })
  })

  it('says which headers and credentials a write takes', () => {
    const post = document.paths['/trims']!.post!
    expect(post.parameters).toContainEqual(
      expect.objectContaining({ name: 'Idempotency-Key', in: 'header', required: true }),
    )
    expect(post).toMatchObject({ security: [{ session: [] }, { token: [] }] })
    const put = document.paths['/designs/{key}/revisions/{number}']!.put!
    expect(put.parameters).toContainEqual(
      expect.objectContaining({ name: 'If-Match', in: 'header', required: true }),
    )
    expect(Object.keys(put.responses)).toEqual(expect.arrayContaining(['409', '412', '428']))
    const release = document.paths['/designs/{key}/revisions/{number}/release']!.post!
    expect(release).toMatchObject({ security: [{ session: [] }] })
  })
})

describe('S3 fuzzing by the document', () => {
  const seed = runSeed()
  const odd = fc.oneof(
    fc.jsonValue({ maxDepth: 3 }),
    fc.constantFrom(
      null,
      true,
      -1,
      0.5,
      1e308,
      2 ** 53,
      '',
      ' ',
      '\u0000',
      '../..',
      "' OR 1=1 --",
      '<script>',
      '\u202e',
      '💣',
      'x'.repeat(2_000),
    ),
  )

  /** A valid body with something done to it: a field changed, taken out, or put in. */
  const mutated = (body: object) =>
    fc
      .tuple(fc.nat(), odd, fc.constantFrom('change', 'remove', 'add', 'nothing'), fc.string())
      .map(([at, value, what, name]) => {
        const copy = structuredClone(body) as Record<string, unknown>
        const keys = Object.keys(copy)
        const key = keys[at % keys.length]!
        if (what === 'change') copy[key] = value
        if (what === 'remove') delete copy[key]
        if (what === 'add') copy[name] = value
        return copy
      })
  const bodies: Record<string, object> = {
    recordTrim: trimBody({
      applied: 'neutral',
      conditions: { temperatureC: 23 },
      measuredAt: '2026-01-01T00:00:00Z',
    }),
    recordBatch: trimBody({ key: 'fuzz-1', applied: 'neutral' }),
    createDesign: { key: 'F1', document: unipolar() },
    startRevision: { document: unipolar({ title: 'Fuzzed' }), from: 1 },
    saveDraft: { document: unipolar({ title: 'Fuzzed' }) },
    returnRevision: { reason: 'a reason long enough' },
    withdrawRevision: { reason: 'a reason long enough' },
    writeFinding: { subject: { kind: 'lot', design: 'U18', lot: 'FUZZ' }, text: 'words enough' },
    answerFinding: { text: 'words enough' },
    closeFinding: { text: 'words enough' },
    signIn: { email: 'a@example.org', password: 'b' },
    setUp: { secret: 's', name: 'N', email: 'a@example.org', password: 'p' },
    createStation: { name: 'S' },
    changeStation: { name: 'S2' },
    createToken: { name: 'T', station: null, scopes: ['designs:read'], days: 1 },
  }
  const known: Record<string, string> = { key: 'U18', number: '2', lot: 'FUZZ' }
  const queryNames = ['unit', 'design', 'serial', 'after', 'limit', 'kind', 'verdict', 'to', 'from', 'lot']
  queryNames.push('station', 'by', 'attempt', 'revision', 'record', 'state', 'finding', 'x')
  const anyRequest = fc.record({
    pick: fc.nat(),
    part: odd,
    /** Half of the requests go to things that are there. */
    known: fc.boolean(),
    query: fc.dictionary(fc.constantFrom(...queryNames), fc.string(), { maxKeys: 3 }),
    who: fc.nat(7),
    key: fc.option(fc.string(), { freq: 5 }),
    mutation: fc.nat(),
  })

  const requests = Number(process.env.OGEE_FUZZ ?? 20_000)

  it(`has no 5xx, no undocumented status, no breach of a schema, no talk of our insides in ${requests} requests (seed ${seed})`, async () => {
    const list = operations()
    const samples = fc.sample(anyRequest, { numRuns: requests, seed })
    const changed = Object.fromEntries(
      Object.entries(bodies).map(([id, body]) => [id, fc.sample(mutated(body), { numRuns: 200, seed })]),
    )
    const work = samples.map((sample) => async () => {
      const { path, verb, operation } = list[sample.pick % list.length]!
      const part = typeof sample.part === 'string' ? sample.part : JSON.stringify(sample.part)
      const target = path.replaceAll(/\{(\w+)\}/g, (_, name: string) =>
        encodeURIComponent((sample.known && known[name]) || part.replaceAll(/\p{Cs}/gu, '?')),
      )
      const query = new URLSearchParams(Object.entries(sample.query)).toString()
      const body = changed[operation.operationId]?.[sample.mutation % 200]
      const response = await fetch(`${harness.url}/api/v1${target}${query === '' ? '' : `?${query}`}`, {
        method: verb.toUpperCase(),
        headers: { ...headersOf(sample), 'Content-Type': mediaTypeOf(operation) },
        ...(body === undefined ? {} : { body: JSON.stringify(body) }),
      })
      const text = await response.text()
      const about = `${verb} ${target} ${JSON.stringify(body)?.slice(0, 300)}: ${response.status} ${text.slice(0, 300)}`
      expect(response.status, about).toBeLessThan(500)
      const reached =
        target.split('/').length === path.split('/').length &&
        !target.endsWith('/') &&
        !/\/\.{1,2}$/.test(target)
      if (reached) expect(Object.keys(operation.responses), about).toContain(String(response.status))
      expect(text, about).not.toMatch(/node_modules|\.ts:\d|SELECT |Sequelize|at \w+ \(/)
    })
    for (let i = 0; i < work.length; i += 8) await Promise.all(work.slice(i, i + 8).map((run) => run()))
  }, 600_000)

  const mediaTypeOf = ({ requestBody }: Operation) =>
    Object.keys(requestBody?.content ?? {})[0] ?? 'application/json'

  function headersOf({ who, key }: { who: number; key: string | null }): Record<string, string> {
    const headers: Record<string, string> = {
      'x-ogee': '1',
      'Sec-Fetch-Site': 'same-origin',
      'If-Match': '*',
    }
    if (who < 4) headers.Cookie = cookies[who]!
    else if (who < 6) headers.Authorization = `Bearer ${tokens[who - 4]}`
    if (key === null) headers['Idempotency-Key'] = newKey()
    else if (/^[\x20-\x7e]*$/.test(key)) headers['Idempotency-Key'] = key
    return headers
  }
})
