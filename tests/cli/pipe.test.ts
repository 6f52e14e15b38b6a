import { once } from 'node:events'
import { createInterface } from 'node:readline'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { examplePoints, recordOf, unit } from './support/answers.ts'
import { builtCli } from './support/built-cli.ts'
import { cut, FakeServer, json, problem, type Reply } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const env = () => ({
  OGEE_URL: server.url,
  OGEE_TOKEN: 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789',
})
const recorded: Reply = (seen, response) => {
  if (seen.path.includes('/units')) json(200, { items: [unit] })(seen, response)
  else json(201, { ...recordOf(seen), kind: seen.body?.kind ?? 'trim' })(seen, response)
}

beforeAll(async () => {
  await server.start()
})
afterAll(async () => await server.stop())
beforeEach(() => server.willAnswer(recorded))

type Answer = {
  id: unknown
  exit: number
  record?: { unit: string }
  unit?: object
  problem?: { code: string }
}
const ask = async (lines: readonly unknown[], args: readonly string[] = ['--design', 'DBS-A']) => {
  const input = lines.map((line) => `${typeof line === 'string' ? line : JSON.stringify(line)}\n`).join('')
  const ran = await cli.run(['pipe', ...args], { env: env(), input })
  const answers = ran.stdout.split('\n').filter((line) => line !== '')
  return { ...ran, answers: answers.map((line) => JSON.parse(line) as Answer) }
}
const trim = { do: 'trim', unit: 'A', points: examplePoints }

describe('ogee pipe', () => {
  test('answers each line in its turn, with its id and the exit code of the command of that name', async () => {
    const { answers, code, stderr } = await ask([
      { id: 1, ...trim },
      { id: 'two', ...trim, do: 'check', unit: 'B' },
      { id: null, do: 'unit', unit: '031' },
      '',
      { id: { any: 'thing' }, do: 'fly' },
      'not json',
      '[]',
      { id: 7, ...trim, surprise: 1 },
      { id: 8, ...trim, design: 'OTHER' },
      { id: 9, ...trim, key: 'with space' },
      { id: 10, do: 'unit' },
      { id: 11, ...trim, key: 'mine' },
    ])
    expect([code, stderr]).toEqual([0, ''])
    expect(answers.map(({ id, exit, problem }) => [id, exit, problem?.code])).toEqual([
      [1, 0, undefined],
      ['two', 0, undefined],
      [null, 0, undefined],
      [{ any: 'thing' }, 65, 'invalid-request'],
      [null, 65, 'malformed-json'],
      [null, 65, 'invalid-request'],
      [7, 65, 'invalid-request'],
      [8, 65, 'invalid-request'],
      [9, 65, 'invalid-request'],
      [10, 65, 'invalid-request'],
      [11, 0, undefined],
    ])
    expect(answers[0]?.record).toMatchObject({ format: 'ogee.record/1', unit: 'A' })
    expect(answers[2]?.unit).toMatchObject({ format: 'ogee.unit/1', serial: '031' })
    expect(server.seen.map(({ body, key }) => [body?.unit, body?.kind, key?.slice(0, 6)])).toEqual([
      ['A', undefined, 'ogee1-'],
      ['B', 'verify', 'ogee1-'],
      [undefined, undefined, undefined],
      ['A', undefined, 'mine'],
    ])
  })

  test('flags complete every line; lines may name the design instead', async () => {
    await ask(
      [{ ...trim }, { do: 'check', unit: 'B', points: examplePoints }],
      [
        ...['--design', 'DBS-A', '--channel', '2', '--applied', 'neutral', '--effects', 'design'],
        ...['--note', 'bench 3', '--temperature', '23 °C'],
      ],
    )
    const common = { design: 'DBS-A', channel: '2', applied: 'neutral', points: examplePoints }
    const conditions = { note: 'bench 3', temperatureC: 23 }
    expect(server.seen.map(({ body }) => body)).toEqual([
      { ...common, unit: 'A', effects: 'design', conditions },
      { ...common, unit: 'B', kind: 'verify', conditions },
    ])
    const { answers } = await ask([{ ...trim, design: 'X' }, trim], [])
    expect(server.seen.at(-1)?.body).toMatchObject({ design: 'X' })
    expect(answers[1]).toMatchObject({ exit: 65, problem: { code: 'invalid-request' } })
  })

  test('verdicts and refusals of the server have their exit codes', async () => {
    server.willAnswer(
      (seen, response) =>
        json(201, { ...recordOf(seen), verdict: 'out-of-reach', accepted: false })(seen, response),
      problem('applied-required'),
      problem('token-invalid'),
      cut,
      recorded,
    )
    const { answers, code } = await ask([1, 2, 3, 4].map((id) => ({ id, ...trim, unit: `U${id}` })))
    expect(answers.map(({ id, exit }) => [id, exit])).toEqual([
      [1, 10],
      [2, 65],
      [3, 77],
      // Cut on its way, and asked again with the same key.
      [4, 0],
    ])
    expect(code).toBe(0)
    expect(server.seen[3]?.key).toBe(server.seen[4]?.key)
  })

  test('answers while its input stays open, one line after the other, and ends with it', async () => {
    const child = cli.start(['pipe', '--design', 'DBS-A'], { env: env() })
    if (!child.stdin || !child.stdout) throw new Error('no pipe')
    const answers = createInterface({ input: child.stdout })[Symbol.asyncIterator]()
    for (let id = 0; id < 50; id += 1) {
      child.stdin.write(`${JSON.stringify({ id, ...trim, unit: `U${id}` })}\n`)
      expect(JSON.parse(String((await answers.next()).value))).toMatchObject({ id, exit: 0 })
    }
    // One kept connection is enough for all.
    child.stdin.end()
    expect((await once(child, 'exit'))[0]).toBe(0)
  })

  test('ends quietly when nobody hears its answers, although lines could still come', async () => {
    const child = cli.start(['pipe', '--design', 'DBS-A'], { env: env() })
    const errors: Buffer[] = []
    child.stderr?.on('data', (piece: Buffer) => errors.push(piece))
    child.stdin?.on('error', () => undefined)
    child.stdin?.write(`${JSON.stringify({ id: 1, ...trim })}\n`)
    await once(child.stdout as NodeJS.ReadableStream, 'data')
    child.stdout?.destroy()
    let exited = false
    const exit = once(child, 'exit').then(([code]) => {
      exited = true
      return code as number
    })
    for (let i = 0; !exited && i < 200; i += 1) {
      child.stdin?.write(`${JSON.stringify({ id: 2, ...trim, unit: `V${i}` })}\n`)
      await sleep(20)
    }
    expect(await exit).toBe(75)
    expect(Buffer.concat(errors).toString()).toBe('')
  })

  test('Ctrl-C is 130', async () => {
    server.willAnswer(() => undefined)
    const child = cli.start(['pipe', '--design', 'DBS-A'], { env: env() })
    child.stdin?.write(`${JSON.stringify({ id: 1, ...trim })}\n`)
    for (let waited = 0; server.seen.length === 0 && waited < 20_000; waited += 20) await sleep(20)
    child.kill('SIGINT')
    expect((await once(child, 'exit'))[0]).toBe(130)
  })
})
