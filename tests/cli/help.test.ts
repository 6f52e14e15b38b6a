import { spawn } from 'node:child_process'
import { createHash } from 'node:crypto'
import { copyFileSync, mkdirSync, symlinkSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { commandTable } from '../../cli/command-table.ts'
import { lotCounts, lotDetail, lotLine, lotUnit } from '../support/lot-fixtures.ts'
import { memoryLedger, plainBodies } from '../support/memory-ledger.ts'
import { revisionLine as lineOf } from '../support/revision-lines.ts'
import {
  batchAnswer,
  designBytes,
  examplePoints,
  line,
  me,
  recordIds,
  recordOf,
  revision,
  unit,
} from './support/answers.ts'
import { builtCli, ended, examples } from './support/built-cli.ts'
import { FakeServer, json, problem } from './support/fake-server.ts'

const cli = builtCli()
const server = new FakeServer()
const ledger = memoryLedger(plainBodies(3).map((body, i) => (i === 0 ? { ...body, id: recordIds[0] } : body)))
const lone = memoryLedger([], ledger.signer)
const names = commandTable.flatMap((entry) =>
  'verbs' in entry ? entry.verbs.map(({ name }) => `${entry.name} ${name}`) : [entry.name],
)

/** Answers whatever the examples ask, as the contract has it. */
function answerEverything(): void {
  const hash = createHash('sha256').update(designBytes).digest('hex')
  const { document: _, bytes: __, key: ___, ...revisionLine } = revision(hash)
  const draft = lineOf({ number: 2 })
  const design = {
    key: 'DBS-A',
    title: revisionLine.title,
    released: 1,
    copiedFrom: null,
    revisions: [revisionLine, draft],
  }
  const routes: [RegExp, (seen: Parameters<typeof recordOf>[0]) => unknown][] = [
    [/\/me$/, () => me],
    [/\/lots\?/, () => ({ items: [lotLine()], next: null })],
    [/\/lots$|\/close$|\/lots\/2417$/, () => lotDetail({ counts: lotCounts({ 'ok-first': 2 }) })],
    [/\/lots\/2417\/units/, () => ({ items: [lotUnit(1), lotUnit(2)], next: null, newest: 2, records: 2 })],
    [/\/designs\/DBS-A\/revisions\/2\/review$/, () => ({ ...draft, key: 'DBS-A', state: 'in-review' })],
    [/\/designs\/DBS-A\/revisions$/, () => ({ ...draft, key: 'DBS-A' })],
    [/\/designs\/DBS-A\/revisions\//, () => revision(hash)],
    [/\/designs$/, () => ({ ...design, key: 'DBS-B', revisions: [draft] })],
    [/\/designs\/DBS-A$/, () => design],
    [/\/designs\?/, () => ({ items: [design], next: null })],
    [/\/units\?/, () => ({ items: [unit], next: null })],
    [/\/trims\?/, () => ({ items: [line(7), line(6)], next: null })],
    [/\/trims$/, recordOf],
    [/\/ledger\/proof\//, () => ledger.proofOf(0)],
    [/\/ledger\/keys$/, () => lone.answers.keys],
    [/\/ledger\/checkpoints\?/, () => lone.answers.checkpoints],
    [/\/ledger\/consistency\?/, () => lone.answers.consistency],
    [/\/ledger\/strays\?/, () => ({ items: [], next: null })],
  ]
  const texts: [RegExp, string][] = [
    [/\/ledger\/key$/, lone.pub],
    [/\/ledger\/checkpoint$/, lone.note],
    [/\/ledger\/entries\?/, lone.answers.entries],
  ]
  server.willAnswer((seen, response) => {
    if (seen.path.endsWith('/batches')) {
      response.end(batchAnswer(seen))
      return
    }
    const [, text] = texts.find(([path]) => path.test(seen.path)) ?? []
    if (text !== undefined) {
      response.end(text)
      return
    }
    const route = routes.find(([path]) => path.test(seen.path))
    if (!route) problem('not-found')(seen, response)
    else json(seen.method === 'POST' ? 201 : 200, route[1](seen))(seen, response)
  })
}

beforeAll(async () => {
  await server.start()
  mkdirSync(join(cli.folder, 'path'), { recursive: true })
  symlinkSync(cli.path, join(cli.folder, 'path/ogee'))
  copyFileSync(join(examples, 'unipolar-18.design.json'), join(cli.folder, 'design.json'))
  copyFileSync(join(examples, 'unipolar-18.points.csv'), join(cli.folder, 'points.csv'))
  writeFileSync(
    join(cli.folder, 'as-left.csv'),
    'code,measured,uncertainty\n0,0.000001,1e-6\n131072,5.000002,1e-6\n',
  )
  const rows = ['031', '032'].flatMap((unit) =>
    examplePoints.map(({ code, measured }) => `${unit},${code},${measured}\n`),
  )
  writeFileSync(join(cli.folder, 'units.csv'), `unit,code,measured\n${rows.join('')}`)
  writeFileSync(join(cli.folder, 'questions.ndjson'), '{"id":1,"do":"unit","unit":"031"}\n')
  writeFileSync(join(cli.folder, 'serials.csv'), 'unit\n031\n032\n')
  writeFileSync(join(cli.folder, 'ogee.pub'), ledger.pub)
  writeFileSync(join(cli.folder, 'proof.json'), JSON.stringify(ledger.proofOf(0)))
  writeFileSync(join(cli.folder, 'checkpoint.txt'), lone.note)
  mkdirSync(join(cli.folder, 'spool/sent'), { recursive: true })
  writeFileSync(join(cli.folder, 'spool/sent/1.json'), JSON.stringify(ledger.receiptOf(0)))
  answerEverything()
})
afterAll(async () => await server.stop())

/** A line of the shell, as somebody copies it from the help text: `ogee` is found on PATH and runs by itself. */
async function shell(command: string) {
  const env = {
    PATH: `${join(cli.folder, 'path')}:${process.env.PATH ?? ''}`,
    HOME: cli.folder,
    OGEE_URL: server.url,
    OGEE_TOKEN: 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789',
  }
  return await ended(spawn('bash', ['-c', command], { cwd: cli.folder, env }))
}

describe('L6: help', () => {
  test.each(names)('the examples in the help of %s work as they stand', async (name) => {
    const { stdout, code } = await shell(`ogee help ${name}`)
    expect(code).toBe(0)
    const lines = stdout
      .slice(stdout.search(/^Examples?:$/m))
      .split('\n')
      .filter((row) => row.startsWith('  ogee '))
    expect(lines.length).toBeGreaterThan(0)
    for (const example of lines) {
      const ran = await shell(example)
      expect({ example, code: ran.code, stderr: ran.stderr }).toEqual({ example, code: 0, stderr: '' })
      if (!example.includes('>')) expect(ran.stdout).not.toBe('')
    }
  })

  test('every option is described, in a sentence part without a full stop', async () => {
    for (const name of names) {
      const { stdout } = await shell(`ogee help ${name}`)
      const options = stdout.split('\n').filter((row) => /^ {2}-/.test(row))
      expect(options.length).toBeGreaterThan(0)
      for (const option of options) expect(option).toMatch(/^ {2}-\S.*? {2,}\S/)
    }
  })

  test('help and version on standard output, with 0', async () => {
    for (const command of ['ogee --help', 'ogee help', 'ogee -h', 'ogee codes -h', 'ogee design --help']) {
      const ran = await shell(command)
      expect({ command, code: ran.code, stderr: ran.stderr }).toEqual({ command, code: 0, stderr: '' })
      expect(ran.stdout).toContain('Usage: ogee')
    }
    for (const command of ['ogee --version', 'ogee -V'])
      expect((await shell(command)).stdout).toMatch(/^\d+\.\d+\.\d+\n$/)
  })
})
