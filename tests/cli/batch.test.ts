import { spawn } from 'node:child_process'
import { createHash } from 'node:crypto'
import { once } from 'node:events'
import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as sleep } from 'node:timers/promises'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { batchLine } from '../../shared/contract/batches.ts'
import { record } from '../../shared/contract/record.ts'
import { canonicalBytes, type Json } from '../../shared/ledger/canonical.ts'
import { batchAnswer, designBytes, examplePoints, linesOf, recordOf, revision } from './support/answers.ts'
import { builtCli, ended, problemOf, type Ran, type RunOptions } from './support/built-cli.ts'
import { FakeServer, json, problem, type Reply } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const token = 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
const answered: Reply = (seen, response) => response.end(batchAnswer(seen))

beforeAll(async () => {
  await server.start()
})
afterAll(async () => await server.stop())
beforeEach(() => server.willAnswer(answered))

const env = () => ({ OGEE_URL: server.url, OGEE_TOKEN: token })
const run = async (args: readonly string[], options: RunOptions = {}) =>
  await cli.run(['batch', '-', '--design', 'DBS-A', ...args], {
    ...options,
    env: { ...env(), ...options.env },
  })
const rowsOf = (unit: string, more = '') =>
  examplePoints.map(({ code, measured }) => `${unit},${code},${measured}${more}\n`).join('')
const csvOf = (...units: string[]) => `unit,code,measured\n${units.map((unit) => rowsOf(unit)).join('')}`
const numbered = (n: number) => Array.from({ length: n }, (_, i) => `S${String(i).padStart(5, '0')}`)
const linesIn = ({ stdout }: Ran) =>
  stdout
    .trimEnd()
    .split('\n')
    .map((line) => JSON.parse(line) as Record<string, never>)
const sent = () => server.seen.flatMap((seen) => linesOf(seen))

describe('what is sent', () => {
  test('a line a unit, in blocks, with the key that `ogee trim` would have', async () => {
    const ran = await run(['--format', 'ndjson', '--jobs', '1'], { input: csvOf(...numbered(1_200)) })
    expect([ran.code, ran.stderr]).toEqual([0, ''])
    expect(server.seen.map((seen) => [seen.path, linesOf(seen).length])).toEqual([
      ['/api/v1/batches', 500],
      ['/api/v1/batches', 500],
      ['/api/v1/batches', 200],
    ])
    for (const line of sent()) {
      const { key, ...body } = batchLine.parse(line) && line
      const bare = { design: 'DBS-A', unit: body.unit, points: examplePoints }
      expect(body).toEqual(bare)
      expect(key).toBe(
        `ogee1-${createHash('sha256')
          .update(canonicalBytes(bare as Json))
          .digest('base64url')}`,
      )
    }
  })

  test('columns and flags reach their places; a key column is the key', async () => {
    const head = 'unit,channel,range,lot,applied_gain,applied_offset,instrument,key,code,measured\n'
    const rows = examplePoints.map(
      ({ code, measured }) => `032,1,u10,L7,5,6,DMM-07,k32,${code},${measured}\n`,
    )
    const flags =
      '--kind verify --revision 2 --follows last --temperature 23.4 --note n --measured-at 2026-03-02T14:07:31Z'
    await run(flags.split(' '), { input: head + rows.join('') })
    expect(sent()).toEqual([
      {
        key: 'k32',
        kind: 'verify',
        design: 'DBS-A',
        revision: 2,
        unit: '032',
        lot: 'L7',
        channel: '1',
        range: 'u10',
        applied: { gain: 5, offset: 6 },
        points: examplePoints,
        conditions: { temperatureC: 23.4, instrument: 'DMM-07', note: 'n' },
        measuredAt: '2026-03-02T14:07:31Z',
        follows: 'last',
      },
    ])
  })

  test('NDJSON: bodies of POST /trims, completed by flags; what differs is refused in its line', async () => {
    const lines = [
      { unit: 'A', points: examplePoints, key: 'mine' },
      { unit: 'B', design: 'DBS-A', kind: 'verify', points: examplePoints, conditions: { note: 'x' } },
      { unit: 'C', design: 'OTHER', points: examplePoints },
      { unit: 'D', points: examplePoints, extra: 1 },
      { unit: 'A', points: examplePoints, key: 'mine' },
    ]
    const other = { unit: 'E', points: examplePoints, conditions: { instrument: 'DMM-08' } }
    const input = `${lines.map((line) => JSON.stringify(line)).join('\n')}\n\nnot json\n[]\n${JSON.stringify(other)}`
    const ran = await run(['--format', 'ndjson', '--instrument', 'DMM-07'], { input })
    expect(sent()).toEqual([
      { ...lines[0], design: 'DBS-A', conditions: { instrument: 'DMM-07' } },
      { ...lines[1], key: expect.any(String), conditions: { instrument: 'DMM-07', note: 'x' } },
    ])
    expect(ran.code).toBe(20)
    expect(
      linesIn(ran).map(({ line, unit, exit, problem }) => [
        line,
        unit,
        exit,
        (problem as unknown as { code: string } | undefined)?.code,
      ]),
    ).toEqual([
      [1, 'A', 0, undefined],
      [2, 'B', 0, undefined],
      [3, 'C', 65, 'invalid-request'],
      [4, 'D', 65, 'invalid-request'],
      [5, 'A', 65, 'duplicate-unit'],
      [7, null, 65, 'malformed-json'],
      [8, null, 65, 'invalid-request'],
      [9, 'E', 65, 'invalid-request'],
    ])
    expect(linesIn(ran).at(-1)).toMatchObject({ problem: { errors: [{ path: '/conditions/instrument' }] } })
  })

  test('the lot alone says which design; a file may be named', async () => {
    const file = join(cli.folder, 'named.csv')
    writeFileSync(file, csvOf('031'))
    server.willAnswer((seen, response) => {
      if (seen.path.includes('/lots')) response.end(JSON.stringify({ items: [], next: null }))
      else response.end(batchAnswer(seen))
    })
    const ran = await cli.run(['batch', file, '--lot', 'L9'], { env: env() })
    expect(problemOf(ran)).toMatchObject({ code: 'lot-unknown', exit: 65 })
    const missing = await cli.run(['batch', `${file}.no`, '--design', 'DBS-A'], { env: env() })
    expect(problemOf(missing)).toMatchObject({ code: 'input-missing', exit: 66 })
  })
})

describe('what is printed', () => {
  const mixed: Reply = (seen, response) =>
    response.end(
      batchAnswer(seen, (line, i) => {
        const stored = recordOf({ body: line })
        if (i === 1) return { status: 201, record: { ...stored, verdict: 'out-of-reach', accepted: false } }
        if (i === 2)
          return {
            status: 422,
            problem: {
              type: '/problems/lot-unknown',
              title: 't',
              status: 422,
              detail: 'No lot.',
              code: 'lot-unknown',
            },
          }
        const notices = i === 3 ? [{ code: 'replayed', message: 'Recorded before.' }] : []
        return { status: 201, record: { ...stored, notices } }
      }),
    )
  const units = ['=1+1', 'B', 'C', '👩‍🔬 "x"']
  const quoted = ['=1+1', 'B', 'C', '"👩‍🔬 ""x"""']

  test('csv: the columns of the contract, formulas kept from running', async () => {
    server.willAnswer(mixed)
    const ran = await run(['--format', 'csv'], { input: csvOf(...quoted) })
    expect(ran.code).toBe(20)
    const [head, ...rows] = ran.stdout.trimEnd().split('\n')
    expect(head).toBe(
      'line,unit,channel,range,pass,verdict,accepted,gain_code,gain_word,offset_code,offset_word,offset_error_v,gain_error_ppm,worst_lsb,exit,record,message',
    )
    expect(rows[0]).toMatch(
      /^2,'=1\+1,1,u10,1,ok,true,2593,0xA21,2048,0x800,[-\d.e]+,-203\.4\d*,[\d.]+,0,[0-9a-f-]{36},$/,
    )
    expect(rows[1]).toMatch(/^7,B,1,u10,1,out-of-reach,false,.*,10,[0-9a-f-]{36},$/)
    expect(rows[2]).toBe('12,C,,,,,,,,,,,,,65,,No lot.')
    expect(rows[3]).toMatch(/^17,"👩‍🔬 ""x""",.*,0,[0-9a-f-]{36},Recorded before\.$/)
    expect(ran.stderr).toBe('ogee: 4 units: 2 ok, 1 out of reach, 1 lot unknown; 1 recorded before.\n')
  })

  test('json is one document with a summary, ndjson a line each, table is for people', async () => {
    server.willAnswer(mixed)
    const json = JSON.parse((await run([], { input: csvOf(...quoted) })).stdout)
    expect(json).toMatchObject({
      format: 'ogee.batch/1',
      summary: { lines: 4, good: 2, notGood: 2, replayed: 1, notDone: 0 },
    })
    expect(json.lines.map(({ unit }: { unit: string }) => unit)).toEqual(units)
    expect(record.parse(json.lines[0].record).unit).toBe('=1+1')
    expect(linesIn(await run(['--format', 'ndjson'], { input: csvOf(...quoted) }))).toEqual(json.lines)
    const { stdout } = await run(['--format', 'table'], { input: csvOf(...quoted) })
    expect(stdout.split('\n')[2]).toMatch(/^ {6}7 {2}B .*✕ out of reach$/)
    expect(stdout).not.toContain('\u001b')
  })

  test('in the order of the input, however late a block is answered', async () => {
    let n = 0
    server.willAnswer((seen, response) => {
      // The first of four is answered last.
      setTimeout(() => response.end(batchAnswer(seen)), n++ % 4 === 0 ? 400 : 0)
    })
    const units = numbered(3_100)
    const ran = await run(['--format', 'ndjson'], { input: csvOf(...units) })
    expect(linesIn(ran).map(({ unit }) => unit)).toEqual(units)
  })
})

test('a dry run asks for the design once and sends nothing', async () => {
  const hash = createHash('sha256').update(designBytes).digest('hex')
  server.willAnswer((seen, response) => {
    if (seen.path.includes('/revisions/')) json(200, revision(hash))(seen, response)
    else if (seen.path.includes('/units')) json(200, { items: [] })(seen, response)
    else problem('not-found')(seen, response)
  })
  const ran = await run(['--format', 'ndjson', '--dry-run'], { input: csvOf('A', 'B', 'C') })
  expect(ran.code).toBe(0)
  expect(
    linesIn(ran).map(({ unit, exit, record }) => [unit, exit, (record as unknown as { id: null }).id]),
  ).toEqual([
    ['A', 0, null],
    ['B', 0, null],
    ['C', 0, null],
  ])
  expect(server.seen.every(({ method }) => method === 'GET')).toBe(true)
  expect(server.seen.filter(({ path }) => path.includes('/revisions/'))).toHaveLength(1)
})

describe('bad input', () => {
  test('each bad row is named by line and column; the good units are recorded', async () => {
    const input =
      `unit,code,measured,x_remark\n${rowsOf('A', ',')}B,0,zero,\n${rowsOf('B', ',')}` +
      `C,0,"0,\n${rowsOf('D', ',')}${rowsOf('E', ',')} F,0,0,\n F,262143,9.99,\n${rowsOf('A', ',')}G,0,1+,\nG,262143,10/1 V,`
    const ran = await run(['--format', 'csv'], { input })
    expect(ran.code).toBe(20)
    expect(sent().map(({ unit }) => unit)).toEqual(['A', 'E'])
    const named = ran.stdout
      .trimEnd()
      .split('\n')
      .slice(1)
      .map((row) => row.split(','))
      .map((cells) => [cells[0], cells[1], cells.at(-1)?.slice(0, 28)])
    expect(named).toEqual([
      ['2', 'A', ''],
      ['7', 'B', expect.any(String)],
      ['13', 'B', expect.any(String)],
      ['14', 'D', expect.any(String)],
      ['19', 'E', ''],
      ['24', ' F', expect.any(String)],
      ['26', 'A', expect.any(String)],
      ['31', 'G', expect.any(String)],
    ])
  })

  test('one bad row among 5,000: one unit is named, 999 are recorded', async () => {
    const units = numbered(1_000)
    const bad = csvOf(...units).replace('S00500,65536,2.4994998', 'S00500,65536,2.4994998 Ohm')
    const ran = await run(['--format', 'ndjson'], { input: bad })
    expect(ran.code).toBe(20)
    expect(sent()).toHaveLength(999)
    expect(linesIn(ran).filter(({ exit }) => exit !== 0)).toEqual([
      expect.objectContaining({
        line: 2503,
        unit: 'S00500',
        exit: 65,
        problem: expect.objectContaining({ detail: expect.stringContaining('Line 2503, measured:') }),
      }),
    ])
  })

  test('the same unit twice is refused and named, unless its key differs', async () => {
    const ran = await run(['--format', 'ndjson'], { input: csvOf('A', 'B', 'A') })
    expect(ran.code).toBe(20)
    expect(linesIn(ran)[2]).toMatchObject({ line: 12, unit: 'A', problem: { code: 'duplicate-unit' } })
    const head = 'unit,key,code,measured\n'
    const row = (key: string) =>
      examplePoints.map(({ code, measured }) => `A,${key},${code},${measured}\n`).join('')
    const twice = await run(['--format', 'ndjson', '--applied', 'neutral'], {
      input: head + row('k1') + row('k2'),
    })
    expect(twice.code).toBe(0)
    expect(sent().map(({ key }) => key)).toEqual(expect.arrayContaining(['k1', 'k2']))
  })

  test('an unknown column, no rows, no UTF-8, nothing at all', async () => {
    const head = await run([], { input: 'unit,code,measured,Farbe\n' })
    expect(problemOf(head)).toMatchObject({ code: 'csv-header', exit: 65 })
    const noUnit = await run([], { input: 'code,measured\n0,1\n' })
    expect(problemOf(noUnit).detail).toContain('Column unit is missing')
    const nothing = await run([], { input: '' })
    expect(problemOf(nothing)).toMatchObject({ code: 'csv-empty', exit: 65 })
    const array = await run([], { input: `  [{"unit":"A"},\n{"unit":"B"}]\n` })
    expect(problemOf(array)).toMatchObject({ code: 'malformed-json', exit: 65 })
    expect(problemOf(array).detail).toContain('one object a line')
    const spaces = await run([], { input: ' '.repeat(3 * 1024 * 1024) })
    expect(problemOf(spaces)).toMatchObject({ code: 'csv-header', exit: 65 })
    const latin = Buffer.concat([Buffer.from(csvOf('A')), Buffer.from([0xe4, 0x0a])])
    const ran = await run(['--format', 'ndjson'], { input: latin })
    expect(problemOf(ran)).toMatchObject({ code: 'invalid-document', exit: 65 })
  })
})

describe('when the server cannot', () => {
  test('a cut answer, 503 and 429 are tried again; a line that is in flight alone', async () => {
    let posts = 0
    server.willAnswer((seen, response) => {
      posts += 1
      if (posts === 1) return problem('database-unavailable', { 'retry-after': '0' })(seen, response)
      if (posts === 2) {
        // Half of the answer and no end.
        response.write(batchAnswer(seen).slice(0, 5_000))
        return void setTimeout(() => response.destroy(), 20)
      }
      if (posts === 3) return void response.end(batchAnswer(seen).split('\n').slice(0, 2).join('\n'))
      if (posts > 4) return answered(seen, response)
      const held = { type: '', title: '', status: 409, detail: 'In flight.', code: 'idempotency-in-flight' }
      response.end(
        batchAnswer(seen, (line, i) =>
          i === 1 ? { status: 409, problem: held } : { status: 201, record: recordOf({ body: line }) },
        ),
      )
    })
    const ran = await run(['--format', 'ndjson'], { input: csvOf('A', 'B', 'C') })
    expect(ran.code).toBe(0)
    expect(
      server.seen.map((seen) =>
        linesOf(seen)
          .map(({ unit }) => unit)
          .join(''),
      ),
    ).toEqual(['ABC', 'ABC', 'ABC', 'ABC', 'B'])
    expect(linesIn(ran).map(({ unit }) => unit)).toEqual(['A', 'B', 'C'])
  })

  test('a token that is refused ends it at once with 77 and names what was not done', async () => {
    let posts = 0
    server.willAnswer((seen, response) => {
      posts += 1
      if (posts === 1) return answered(seen, response)
      const gone = { type: '', title: '', status: 401, detail: 'Revoked.', code: 'token-invalid' }
      response.end(
        batchAnswer(seen, (line, i) =>
          i < 10 ? { status: 201, record: recordOf({ body: line }) } : { status: 401, problem: gone },
        ),
      )
    })
    const units = numbered(900)
    const ran = await run(['--format', 'json', '--jobs', '1'], { input: csvOf(...units) })
    expect(ran.code).toBe(77)
    expect(problemOf(ran)).toMatchObject({
      code: 'token-invalid',
      exit: 77,
      facts: { done: 510, notDone: 390, firstNotDone: 2 + 510 * 5 },
    })
    // Finished results and nothing else, as a whole document.
    expect(JSON.parse(ran.stdout).lines).toHaveLength(510)
  })

  test('a batch that is cut ends with 75, not 20', async () => {
    server.willAnswer((seen, response) => {
      if (server.seen.length === 1)
        return response.end(
          batchAnswer(seen, (line) => ({
            status: 201,
            record: { ...recordOf({ body: line }), verdict: 'suspect', accepted: false },
          })),
        )
      problem('database-unavailable', { 'retry-after': '120' })(seen, response)
    })
    const ran = await run(['--format', 'ndjson', '--jobs', '1'], { input: csvOf(...numbered(600)) })
    expect(ran.code).toBe(75)
    expect(linesIn(ran)).toHaveLength(500)
    expect(problemOf(ran)).toMatchObject({ code: 'database-unavailable', facts: { done: 500, notDone: 100 } })
    expect(ran.stderr).toContain('nothing is doubled')
  })

  test('never reached is 69; an answer that is not as agreed is 70', async () => {
    const nobody = await run([], {
      input: csvOf('A'),
      env: { OGEE_URL: 'http://127.0.0.1:9', OGEE_TOKEN: token },
    })
    expect(problemOf(nobody)).toMatchObject({ code: 'server-unreachable', exit: 69 })
    server.willAnswer((_, response) => response.end('{"surprise":true}\n'))
    expect((await run([], { input: csvOf('A') })).code).toBe(70)
  })
})

describe('streams', () => {
  test('`| head` ends it quietly, and stops it', async () => {
    const args = ['batch', '-', '--design', 'DBS-A', '--format', 'csv', '--jobs', '1']
    const child = cli.start(args, { env: env() })
    child.stdin?.on('error', () => undefined)
    child.stdin?.end(csvOf(...numbered(20_000)))
    const errors: Buffer[] = []
    child.stderr?.on('data', (piece: Buffer) => errors.push(piece))
    await once(child.stdout as NodeJS.ReadableStream, 'data')
    child.stdout?.destroy()
    const [code] = await once(child, 'exit')
    expect([code, Buffer.concat(errors).toString()]).toEqual([75, ''])
    expect(sent().length).toBeLessThan(20_000)
  })

  test('what came so far is answered while the input pauses', async () => {
    const child = cli.start(['batch', '-', '--design', 'DBS-A', '--format', 'ndjson'], { env: env() })
    child.stdin?.write(csvOf('A', 'B'))
    // B may go on; A is complete.
    const [piece] = (await once(child.stdout as NodeJS.ReadableStream, 'data')) as [Buffer]
    expect(JSON.parse(piece.toString().split('\n')[0] ?? '')).toMatchObject({ unit: 'A', exit: 0 })
    child.stdin?.end()
    expect((await once(child, 'exit'))[0]).toBe(0)
    expect(sent().map(({ unit }) => unit)).toEqual(['A', 'B'])
  })

  test('Ctrl-C ends it at once with 130', async () => {
    server.willAnswer(() => undefined)
    const child = cli.start(['batch', '-', '--design', 'DBS-A'], { env: env() })
    child.stdin?.on('error', () => undefined)
    child.stdin?.end(csvOf(...numbered(100)))
    for (let waited = 0; server.seen.length === 0 && waited < 20_000; waited += 20) await sleep(20)
    child.kill('SIGINT')
    expect((await once(child, 'exit'))[0]).toBe(130)
  })

  test('a full disk is 74, and what was recorded stays recorded', async () => {
    const file = join(cli.folder, 'full.csv')
    writeFileSync(file, csvOf(...numbered(10)))
    const line = `'${process.execPath}' '${cli.path}' batch '${file}' --design DBS-A --format csv > /dev/full`
    const child = spawn('bash', ['-c', line], {
      env: { ...env(), PATH: process.env.PATH ?? '', HOME: cli.folder },
    })
    const ran = await ended(child)
    expect(ran.code).toBe(74)
    expect(ran.stderr).toContain('Standard output failed: ENOSPC. Everything up to line 47 was done.')
  })

  test('L3: progress on a terminal, without escape bytes; the summary after it', async () => {
    const file = join(cli.folder, 'progress.csv')
    writeFileSync(file, csvOf(...numbered(2_000)))
    const line = `'${process.execPath}' '${cli.path}' batch '${file}' --design DBS-A --format csv > '${file}.out'`
    const child = spawn('script', ['-qec', line, '/dev/null'], {
      env: { ...env(), PATH: process.env.PATH ?? '', HOME: cli.folder, TERM: 'xterm' },
    })
    const { stdout } = await ended(child)
    expect(stdout).toMatch(/\r\d[\d ]* units, 0 not good, [\d ]+ a second/)
    expect(stdout).toContain('ogee: 2 000 units: 2 000 ok.')
    expect(stdout).not.toContain('\u001b')
    expect(readFileSync(`${file}.out`, 'utf8').trimEnd().split('\n')).toHaveLength(2_001)
  })

  test('a slow reader gets all of it, whole', async () => {
    const units = numbered(4_000)
    const child = cli.start(['batch', '-', '--design', 'DBS-A', '--format', 'ndjson'], { env: env() })
    child.stdin?.end(csvOf(...units))
    let text = ''
    for await (const piece of child.stdout as AsyncIterable<Buffer>) {
      text += piece.toString()
      if (text.length % 7 === 0) await sleep(5)
    }
    expect(
      text
        .trimEnd()
        .split('\n')
        .map((line) => (JSON.parse(line) as { unit: string }).unit),
    ).toEqual(units)
  })
})
