import { createHash } from 'node:crypto'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { verifyDocument } from '../../shared/contract/verify.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { design, designBytes, recordIds, recordOf, revision, unit } from './support/answers.ts'
import { builtCli } from './support/built-cli.ts'
import { FakeServer, json, type Reply } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const asLeft = [
  { code: 0, measured: 0.000001, uncertainty: 1e-6 },
  { code: 131072, measured: 5.000002, uncertainty: 1e-6 },
  { code: 262143, measured: 9.99996, uncertainty: 1e-6 },
]
const rows = asLeft.map(({ code, measured, uncertainty }) => `${code},${measured},${uncertainty}\n`)
const input = `code,measured,uncertainty\n${rows.join('')}`

beforeAll(async () => {
  await server.start()
})
afterAll(async () => await server.stop())

const run = async (...more: string[]) =>
  await cli.run(['check', '--design', 'DBS-A', '--unit', '031', '--points', '-', ...more], {
    input,
    env: { OGEE_URL: server.url, OGEE_TOKEN: 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789' },
  })

/** A verification as the server stores it, with this outcome. */
const verified =
  (outcome: string): Reply =>
  (seen, response) => {
    const result = verifyDocument.parse({ ...verifyPoints(design, asLeft), outcome })
    json(201, { ...recordOf(seen), kind: 'verify', pass: 1, effects: null, result, verdict: outcome })(
      seen,
      response,
    )
  }

describe('ogee check', () => {
  test.each([
    ['pass', 0],
    ['fail', 13],
    ['conditional-pass', 14],
    ['conditional-fail', 15],
  ])('%s ends with %d', async (outcome, exit) => {
    server.willAnswer(verified(outcome))
    const ran = await run()
    expect(ran.code).toBe(exit)
    expect(JSON.parse(ran.stdout)).toMatchObject({ kind: 'verify', verdict: outcome })
    expect(server.seen[0]?.body).toEqual({ kind: 'verify', design: 'DBS-A', unit: '031', points: asLeft })
    expect(server.seen[0]?.key).toMatch(/^ogee1-/)
  })

  test('the table shows each point, csv what was measured', async () => {
    server.willAnswer(verified('pass'))
    const { stdout } = await run('--format', 'table')
    expect(stdout).toMatch(/Outcome +✓ pass/)
    expect(stdout).toMatch(/131072 +5\.0000000 +5\.0000020/)
    const csv = (await run('--format', 'csv')).stdout.split('\n')[1]
    expect(csv).toMatch(/^031,1,u10,1,pass,true,,,,,[-\d.e]+,[-\d.e]+,[-\d.e]+,/)
  })

  test('a dry run judges by the same revision, goes on from the last record, and records nothing', async () => {
    const hash = createHash('sha256').update(designBytes).digest('hex')
    server.willAnswer((seen, response) => {
      if (seen.path.includes('/revisions/')) json(200, revision(hash))(seen, response)
      else if (seen.path.includes('/units')) json(200, { items: [unit] })(seen, response)
      else
        json(
          200,
          recordOf({
            body: {
              unit: '031',
              points: [
                { code: 0, measured: 0 },
                { code: 262143, measured: 9.9979 },
              ],
            },
          }),
        )(seen, response)
    })
    const ran = await run('--channel', '1', '--dry-run')
    const { result, ...record } = JSON.parse(ran.stdout)
    expect(record).toMatchObject({
      id: null,
      dryRun: true,
      kind: 'verify',
      pass: 1,
      follows: recordIds[0],
      applied: { gain: expect.any(Number), offset: expect.any(Number) },
    })
    expect(result).toEqual(JSON.parse(JSON.stringify(verifyPoints(design, asLeft))))
    expect(server.seen.every(({ method }) => method === 'GET')).toBe(true)
  })
})
