import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { designDifference, type RevisionSummary } from '../../shared/contract/revisions.ts'
import { revisionCalls, titled } from '../support/revision-calls.ts'
import { signIn } from '../support/server-client.ts'
import { unipolar } from '../support/server-factories.ts'
import { addDesign, addPerson, addToken, type Harness, serverHarness } from '../support/server-harness.ts'
import { builtCli, problemOf, type RunOptions } from './support/built-cli.ts'

/** Design commands that write, and `diff`, against the real app on a real database. */

const cli = builtCli()
let harness: Harness
let token = ''
let engineer: { cookie: string }

beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  token = (await addToken(harness, ['designs:write'])).token
  await addPerson(harness, 'engineer')
  engineer = { cookie: await signIn(harness.url, 'engineer@example.org') }
}, 120_000)
afterAll(async () => await harness.close())

const run = async (args: readonly string[], options: RunOptions = {}) =>
  await cli.run(['design', ...args], {
    ...options,
    env: { OGEE_URL: harness.url, OGEE_TOKEN: token, ...options.env },
  })

const file = (name: string, document: unknown) =>
  writeFileSync(join(cli.folder, name), JSON.stringify(document))
const done = (ran: { stdout: string }) =>
  JSON.parse(ran.stdout) as RevisionSummary & { done: string; format: string }
const push = (key: string, ...more: string[]) => run(['push', key, '--document', 'd.json', ...more])

describe('push', () => {
  test('a new design, the same again, the draft by its etag, another draft, and the next after a release', async () => {
    file('d.json', titled('One'))
    const made = await push('P-1')
    expect([made.code, made.stderr]).toEqual([0, ''])
    expect(done(made)).toMatchObject({
      format: 'ogee.revision/1',
      key: 'P-1',
      number: 1,
      state: 'draft',
      done: 'created',
    })
    const again = await push('P-1')
    expect([again.code, done(again).done]).toEqual([0, 'unchanged'])

    file('d.json', titled('Two'))
    const blind = await push('P-1')
    expect(blind.code).toBe(65)
    expect(blind.stdout).toBe('')
    expect(problemOf(blind)).toMatchObject({
      code: 'precondition-required',
      facts: { savedBy: 'Test token', etag: done(made).etag },
    })
    expect((await run(['show', 'P-1', '--format', 'table'])).stdout).toContain(done(made).etag)
    // Without its quotes too: shells take them away.
    const saved = await push('P-1', '--if-match', done(made).etag.replaceAll('"', ''))
    expect(done(saved)).toMatchObject({ done: 'saved', number: 1, title: 'Two' })
    file('d.json', titled('Three'))
    const stale = await push('P-1', '--if-match', done(made).etag)
    expect(problemOf(stale)).toMatchObject({
      code: 'precondition-failed',
      exit: 65,
      facts: { etag: done(saved).etag },
    })
    expect(done(await push('P-1', '--new'))).toMatchObject({ done: 'started', number: 2 })
    expect(done(await push('U18'))).toMatchObject({ done: 'started', number: 2, title: 'Three' })
  })

  test('keeps exactly what stands in the file, defaults left out', async () => {
    const document = unipolar({ title: 'Bare' })
    await run(['push', 'P-2', '--document', '-'], { input: JSON.stringify(document) })
    const pulled = await run(['pull', 'P-2', '--revision', '1'])
    expect(JSON.parse(pulled.stdout)).toEqual(document)
    expect(pulled.stdout).not.toContain('"channels"')
  })

  test('a document that is none is told by its path, and nothing is sent', async () => {
    file('d.json', { ...(unipolar() as object), channels: ['a', 'a'] })
    const ran = await push('P-3')
    expect(problemOf(ran)).toMatchObject({
      code: 'invalid-document',
      exit: 65,
      errors: [{ path: '/channels/1' }],
    })
    expect((await run(['show', 'P-3'])).code).toBe(65)
  })

  test.each([
    [['push', 'P-4'], 64],
    [['push', 'P-4', '--document', 'none.json'], 66],
    [['push', 'P-4', '--document', 'd.json', '--new', '--if-match', '"1.1"'], 64],
  ])('%j ends with %i', async (args, exit) => {
    expect((await run(args)).code).toBe(exit)
  })

  test('--if-match without a draft is refused', async () => {
    file('d.json', titled('Four'))
    expect(problemOf(await push('P-5', '--if-match', '"1.1"'))).toMatchObject({ code: 'precondition-failed' })
    await addDesign(harness, 'REL')
    expect(problemOf(await push('REL', '--if-match', '"1.1"'))).toMatchObject({ code: 'precondition-failed' })
  })

  test('a token that only reads is told its scope: 77', async () => {
    const reader = (await addToken(harness, ['designs:read'])).token
    file('d.json', titled('Five'))
    const ran = await run(['push', 'P-6', '--document', 'd.json'], { env: { OGEE_TOKEN: reader } })
    expect([ran.code, problemOf(ran).code]).toEqual([77, 'insufficient-scope'])
  })
})

describe('submit', () => {
  test('the highest draft, or the one named; the same again changes nothing; what is released is refused', async () => {
    file('d.json', titled('S1'))
    await push('S-1')
    const submitted = await run(['submit', 'S-1'])
    expect([submitted.code, submitted.stderr]).toEqual([0, ''])
    expect(done(submitted)).toMatchObject({
      state: 'in-review',
      done: 'submitted',
      submittedBy: 'Test token',
    })
    expect(done(await run(['submit', 'S-1']))).toMatchObject({ done: 'unchanged', state: 'in-review' })
    const table = await run(['submit', 'S-1', '--format', 'table'])
    expect(table.stdout).toContain('1, in review (unchanged)')
    const calls = revisionCalls(harness.url)
    expect((await calls.release(engineer, 'S-1', 1)).status).toBe(200)
    expect(problemOf(await run(['submit', 'S-1']))).toMatchObject({ code: 'revision-state', exit: 65 })
    file('d.json', titled('S2'))
    await push('S-1')
    await push('S-1', '--new')
    expect(done(await run(['submit', 'S-1', '--revision', '2']))).toMatchObject({
      number: 2,
      state: 'in-review',
    })
    expect((await run(['submit', 'S-1', '--revision', '9'])).code).toBe(65)
    expect((await run(['submit', 'S-1', '--revision', 'x'])).code).toBe(64)
    expect((await run(['submit', 'NOWHERE'])).code).toBe(65)
  })
})

describe('diff', () => {
  const budget = (limitPpm: number) => ({
    gain: [{ name: 'Reference', limitPpm, distribution: 'rectangular', when: 'initial' }],
    offset: [],
  })

  test('two revisions and a file, in each format', async () => {
    file('d.json', unipolar({ budget: budget(250) }))
    await push('D-1')
    file('d.json', unipolar({ budget: budget(2500) }))
    await push('D-1', '--new')
    const json = await run(['diff', 'D-1', '1', '2'])
    expect([json.code, json.stderr]).toEqual([0, ''])
    const difference = designDifference.parse(JSON.parse(json.stdout))
    expect(difference.changes.map(({ path }) => path)).toEqual(['/budget/gain/0/limitPpm'])
    const ofFile = await run(['diff', 'D-1', '1', '--document', 'd.json'])
    expect(designDifference.parse(JSON.parse(ofFile.stdout))).toEqual(difference)
    const table = (await run(['diff', 'D-1', '1', '2', '--format', 'table'])).stdout
    expect(table).toContain('Gain budget, Reference, limit: from 250 ppm to 2500 ppm.')
    expect(table).toContain('The answer for range u10:')
    expect((await run(['diff', 'D-1', '1', '2', '--format', 'csv'])).stdout.split('\n')).toEqual([
      'path,kind,label,before,after',
      '/budget/gain/0/limitPpm,changed,"Gain budget, Reference, limit",250 ppm,2500 ppm',
      '',
    ])
    expect((await run(['diff', 'D-1', '2', '--document', 'd.json', '--format', 'table'])).stdout).toContain(
      'no field differs',
    )
    expect((await run(['diff', 'U18', 'released', '1'])).code).toBe(0)
  })

  test.each([
    [['diff', 'D-1', '1'], 64],
    [['diff', 'D-1', '1', '2', '--document', 'd.json'], 64],
    [['diff', 'D-1', 'one', '2'], 64],
    [['diff', 'D-1', '1', '9'], 65],
  ])('%j ends with %i', async (args, exit) => {
    expect((await run(args)).code).toBe(exit)
  })
})
