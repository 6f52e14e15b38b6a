import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import Papa from 'papaparse'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import type { LotDetail } from '../../shared/contract/lots.ts'
import { codesHeads } from '../../shared/lots/codes-table.ts'
import { unguarded } from '../../shared/points/formula-guard.ts'
import { codeOfWordText } from '../../shared/solver/coding.ts'
import { post } from '../support/server-client.ts'
import { pointsOf, trimBody } from '../support/server-factories.ts'
import { addDesign, addStation, addToken, type Harness, serverHarness } from '../support/server-harness.ts'
import { builtCli, problemOf, type RunOptions } from './support/built-cli.ts'

/** The built command line against a server: lots from opening to the codes of every unit. */

const cli = builtCli()
let harness: Harness
let token = ''
beforeAll(async () => {
  harness = await serverHarness()
  await addDesign(harness, 'U18')
  await addDesign(harness, 'OTHER')
  const station = await addStation(harness, 'Station A')
  const scopes = ['trims:write', 'trims:read-all', 'designs:read'] as const
  token = (await addToken(harness, [...scopes], station.id)).token
})
afterAll(() => harness.close())

const run = async (args: readonly string[], options: RunOptions = {}) =>
  await cli.run(['lot', ...args], { ...options, env: { OGEE_URL: harness.url, OGEE_TOKEN: token } })
const trim = (lot: string, unit: string, gainPpm = -203) =>
  post(harness.url, { token }, trimBody({ lot, unit, points: pointsOf({ gainPpm }) }))
const lotOf = ({ stdout }: { stdout: string }) => JSON.parse(stdout) as LotDetail

describe('lot', () => {
  test('open, trim, show, codes, close; each may be repeated', async () => {
    writeFileSync(
      join(cli.folder, 'serials.csv'),
      '\ufeffunit,note\r\n031,"a, b"\r\n\'=1+1,\r\n031,twice\r\n',
    )
    const open = ['open', 'A-1', '--design', 'U18', '--expect', 'serials.csv']
    const opened = await run(open)
    expect(opened.stderr).toBe('')
    expect(lotOf(opened)).toMatchObject({ format: 'ogee.lot/1', expected: 2, counts: { missing: 2 } })
    expect((await run(open)).code).toBe(0)
    await trim('A-1', '031')
    await trim('A-1', '=1+1')
    const shown = await run(['show', 'A-1'])
    expect(shown.code).toBe(0)
    expect(lotOf(shown).counts).toMatchObject({ units: 2, good: 2, missing: 0, share: 1 })
    await trim('A-1', 'bad', -3000)
    expect((await run(['show', 'A-1'])).code).toBe(20)
    const codes = await run(['codes', 'A-1', '--format', 'csv'])
    expect(codes.code).toBe(0)
    const { data } = Papa.parse<string[]>(codes.stdout.trim())
    expect(data[0]).toEqual(codesHeads)
    expect(data.slice(1).map(([unit]) => unguarded(unit!))).toEqual(['031', '=1+1'])
    expect(codes.stdout).not.toMatch(/^=/m)
    const column = (name: (typeof codesHeads)[number]) => data[1]![codesHeads.indexOf(name)]!
    expect(codeOfWordText(column('gain_word'), 12, 'offset-binary')).toBe(Number(column('gain_code')))
    expect(Number(column('gain_word_decimal'))).toBe(Number(column('gain_word')))
    for (const _ of [1, 2]) expect(lotOf(await run(['close', 'A-1'])).state).toBe('closed')
    const late = await run(open)
    expect(problemOf(late)).toMatchObject({ code: 'lot-state', exit: 65 })
  })

  test('ndjson is a row a line and json one document; a lot without codes ends with 12', async () => {
    const lines = (await run(['codes', 'A-1', '--format', 'ndjson'])).stdout.trim().split('\n')
    expect(lines.map((line) => JSON.parse(line).unit)).toEqual(['031', '=1+1'])
    const whole = JSON.parse((await run(['codes', 'A-1', '--format', 'json'])).stdout)
    expect(whole).toMatchObject({ format: 'ogee.lot-codes/1', lot: 'A-1', design: 'U18' })
    expect(whole.codes).toEqual(lines.map((line) => JSON.parse(line)))
    await run(['open', 'EMPTY', '--design', 'U18'])
    const empty = await run(['codes', 'EMPTY', '--format', 'csv'])
    expect([empty.code, empty.stdout]).toEqual([12, `${codesHeads.join(',')}\n`])
  })

  test('two designs with a lot of that name: --design says which', async () => {
    for (const design of ['U18', 'OTHER']) await run(['open', 'TWICE', '--design', design])
    expect(problemOf(await run(['show', 'TWICE']))).toMatchObject({ code: 'lot-unknown', exit: 65 })
    expect(lotOf(await run(['show', 'TWICE', '--design', 'OTHER'])).design).toBe('OTHER')
  })

  test.each([
    ['no such lot', ['show', 'NONE'], 65, 'lot-unknown'],
    ['no design', ['open', 'A-2'], 64, 'usage'],
    ['a key that cannot be one', ['show', 'a b'], 64, 'usage'],
    ['no such file', ['open', 'A-2', '--design', 'U18', '--expect', 'none.csv'], 66, 'input-missing'],
    ['not released', ['open', 'A-2', '--design', 'U18', '--revision', '4'], 65, 'revision-not-released'],
  ])('%s', async (_, args, exit, code) => {
    const ran = await run(args)
    expect(ran.stdout).toBe('')
    expect(problemOf(ran)).toMatchObject({ code, exit })
    expect(ran.code).toBe(exit)
  })

  test('a serial that cannot be one is named by its line, and nothing is opened', async () => {
    const ran = await run(['open', 'A-3', '--design', 'U18', '--expect', '-'], { input: '031\n 032\n033\n' })
    expect(problemOf(ran)).toMatchObject({ code: 'csv-cell', errors: [{ path: 'line 2, unit' }], exit: 65 })
    expect((await run(['show', 'A-3'])).code).toBe(65)
  })
})
