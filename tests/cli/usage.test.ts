import { describe, expect, test } from 'vitest'
import { commandTable } from '../../cli/command-table.ts'
import { parse, runCommandLine } from '../../cli/run.ts'
import { formatAskedFor } from '../../cli/trouble.ts'
import { verdictExit } from '../../shared/contract/exit.ts'
import { errorTable } from '../../shared/errors.ts'
import { memoryIo } from './support/memory-io.ts'

const usage = async (line: string) => {
  const io = memoryIo()
  const code = await runCommandLine(line.split(' '), io)
  expect(io.out()).toBe('')
  return {
    code,
    said: io.err(),
    problem: JSON.parse(io.err().trimEnd().split('\n').at(-1) ?? '') as Record<string, unknown>,
  }
}

describe('a command line that is not right ends with 64 and says what to do', () => {
  test.each([
    ['codse --design d.json', 'Did you mean codes?'],
    ['trmi --points p.csv', 'Did you mean trim?'],
    ['design lsit', 'Did you mean list?'],
    ['codes --desing d.json --points p.csv', 'Did you mean --design?'],
    ['trim --dry-rum --design A --points p.csv', 'Did you mean --dry-run?'],
    ['codes --points p.csv', "The option '--design <file>' is missing."],
    ['codes --design d.json', "The option '--points <file>' is missing."],
    ['codes --design', "Option '--design <file>' argument missing."],
    ['fit --design d.json --points p.csv --method best', 'Allowed choices are best-fit, minimax, terminal.'],
    ['codes --design d.json --points p.csv --format xml', 'Allowed choices are table, json, csv, ndjson.'],
    ['codes --design d.json --points p.csv --applied gain:3', '--applied takes neutral or codes'],
    ['codes --design d.json --points p.csv --applied gain=1,gain=2', '--applied takes neutral or codes'],
    [
      'codes --design d.json --points p.csv --effects learned',
      '--effects learned and --previous go together',
    ],
    ['simulate --design d.json --units 0', '--units takes a whole number from 1'],
    ['simulate --design d.json --units 1e3', '--units takes a whole number from 1'],
    ['trim --unit 031 --points p.csv', 'Name the design with --design, or the lot with --lot.'],
    ['trim --design A --unit 031 --points p.csv --revision 0', '--revision takes a whole number'],
    ['trim --design A --unit 031 --points p.csv --key ä', '--key takes 1 to 128 visible ASCII'],
    ['batch units.csv', 'Name the design with --design, or the lot with --lot.'],
    ['batch --design A', "Missing required argument 'file'."],
    ['batch u.csv --design A --key K', "Unknown option '--key'"],
    ['batch u.csv --design A --jobs 9', '--jobs takes a whole number from 1 to 8'],
    ['batch u.csv --design A --kind override', 'Allowed choices are trim, verify.'],
    ['batch u.csv --design A --kind verify --effects learned', '--effects is for trims'],
    ['check --design A --points p.csv --effects learned', "Unknown option '--effects'"],
    ['pipe --key K', "Unknown option '--key'"],
    ['unit', "Missing required argument 'serial'."],
    ['unit 031 032', 'Too many arguments'],
    ['completion tcsh', 'completion takes bash, zsh, fish'],
  ])('%s', async (line, sentence) => {
    const { code, said, problem } = await usage(line)
    expect(code).toBe(64)
    expect(said.split('\n')[0]).toContain(sentence)
    expect(problem).toMatchObject({ code: 'usage', exit: 64 })
  })

  test('no command at all', async () => {
    const io = memoryIo()
    expect(await runCommandLine([], io)).toBe(64)
    expect(io.err()).toContain('`ogee help` lists them')
  })
})

describe('arguments to options', () => {
  const read = async (line: string) => {
    const chosen = await parse(commandTable, line.split(' '))
    if ('text' in chosen) throw new Error('no command')
    return chosen.command.read(chosen)
  }

  test('codes', async () => {
    expect(
      await read('codes --design d.json --points - --range u10 --applied gain=0xA21,offset=2048'),
    ).toEqual({
      design: 'd.json',
      points: '-',
      range: 'u10',
      applied: { gain: 2593, offset: 2048 },
      previous: undefined,
    })
  })

  test('one of two codes may be said alone, and neutral', async () => {
    expect(await read('codes --design d --points p --applied offset=7')).toMatchObject({
      applied: { offset: 7 },
    })
    expect(await read('codes --design d --points p --applied neutral')).toMatchObject({ applied: 'neutral' })
  })

  test('trim takes every unit flag', async () => {
    const line =
      'trim --design DBS-A --revision 2 --unit 031 --channel 1 --range u10 --applied neutral --effects learned --follows last ' +
      '--instrument DMM-07 --temperature 23.4 --note n --measured-at 2026-03-02T14:07:31+01:00 --key K --dry-run --points - ' +
      '--url http://127.0.0.1:1 --token-file t'
    expect(await read(line)).toEqual({
      design: 'DBS-A',
      revision: 2,
      lot: undefined,
      unit: '031',
      channel: '1',
      range: 'u10',
      applied: 'neutral',
      effects: 'learned',
      follows: 'last',
      instrument: 'DMM-07',
      temperature: '23.4',
      note: 'n',
      measuredAt: '2026-03-02T14:07:31+01:00',
      key: 'K',
      dryRun: true,
      points: '-',
      url: 'http://127.0.0.1:1',
      tokenFile: 't',
    })
  })

  test('history', async () => {
    expect(await read('history --unit 031 --verdict ok --limit 7')).toMatchObject({
      query: { unit: '031', verdict: 'ok' },
      limit: 7,
    })
  })
})

test('the format asked for is known even when nothing else is understood', () => {
  expect(formatAskedFor(['x', '--format', 'csv'], true)).toBe('csv')
  expect(formatAskedFor(['x', '--format=ndjson'], true)).toBe('ndjson')
  expect(formatAskedFor(['x', '--format'], true)).toBe('table')
  expect(formatAskedFor(['x'], false)).toBe('json')
})

test('L1: no exit code is undocumented', () => {
  const documented = new Set([0, 10, 11, 12, 13, 14, 15, 16, 20, 64, 65, 66, 69, 70, 73, 74, 75, 77, 78, 130])
  const used = [...Object.values(verdictExit), ...Object.values(errorTable).map(({ exit }) => exit)]
  expect(used.filter((exit) => !documented.has(exit))).toEqual([])
  // A bad unit is never mixed up with a broken tool.
  expect(Object.values(verdictExit).every((exit) => exit < 64)).toBe(true)
  expect(Object.values(errorTable).every(({ exit }) => exit >= 64)).toBe(true)
})
