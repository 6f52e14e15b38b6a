import { spawn } from 'node:child_process'
import { createHash } from 'node:crypto'
import { once } from 'node:events'
import { setTimeout as sleep } from 'node:timers/promises'
import { describe, expect, test } from 'vitest'
import { builtCli, ended, examples, problemOf } from './support/built-cli.ts'

const cli = builtCli()
const design = `${examples}/unipolar-18.design.json`
const simulate = (units: number, ...more: string[]) => [
  'simulate',
  '--design',
  design,
  '--units',
  String(units),
  ...more,
]

describe('L2: output', () => {
  test('50 MB through a slow pipe arrive whole', async () => {
    const units = 270_000
    const child = cli.start(simulate(units, '--seed', '3', '--format', 'ndjson'))
    const whole = createHash('sha256')
    let bytes = 0
    let lines = 0
    let pieces = 0
    for await (const piece of child.stdout as AsyncIterable<Buffer>) {
      whole.update(piece)
      bytes += piece.length
      for (const byte of piece) if (byte === 10) lines += 1
      pieces += 1
      // A reader that pauses: the writer has to wait for it with a full pipe.
      if (pieces % 100 === 0) await sleep(5)
    }
    const [code] = child.exitCode === null ? await once(child, 'exit') : [child.exitCode]
    expect(code).toBe(0)
    expect(bytes).toBeGreaterThan(50_000_000)
    expect(lines).toBe(units)
    // The same to a reader that takes everything at once, which no back-pressure can have touched.
    const again = cli.start(simulate(units, '--seed', '3', '--format', 'ndjson'))
    const second = createHash('sha256')
    for await (const piece of again.stdout as AsyncIterable<Buffer>) second.update(piece)
    expect(whole.digest('hex')).toBe(second.digest('hex'))
  })

  test('a reader that has seen enough ends it quietly', async () => {
    const line = `'${process.execPath}' '${cli.path}' ${simulate(1_000_000).join(' ')} | head -n 3; echo "\${PIPESTATUS[0]}"`
    const shell = spawn('bash', ['-c', line], { cwd: cli.folder })
    const { stdout, stderr } = await ended(shell)
    expect(stderr).toBe('')
    const lines = stdout.trimEnd().split('\n')
    expect(lines).toHaveLength(4)
    expect(lines[0]).toBe('unit,channel,range,code,measured')
    expect(lines[3]).toBe('0')
  })

  test('a full disk is 74', async () => {
    const line = `'${process.execPath}' '${cli.path}' ${simulate(2).join(' ')} > /dev/full`
    const ran = await ended(spawn('bash', ['-c', line], { cwd: cli.folder }))
    expect(ran.code).toBe(74)
    expect(problemOf(ran)).toMatchObject({ code: 'read-failed', exit: 74 })
  })
})

describe('L4: Ctrl-C', () => {
  test('returns at once with 130, even with a reader that reads nothing', async () => {
    const child = cli.start(simulate(10_000_000))
    await once(child.stdout as NodeJS.ReadableStream, 'readable')
    await sleep(200)
    const errors: Buffer[] = []
    child.stderr?.on('data', (piece: Buffer) => errors.push(piece))
    child.kill('SIGINT')
    const [code, signal] = await once(child, 'exit')
    expect({ code, signal }).toEqual({ code: 130, signal: null })
    child.stdout?.destroy()
    await sleep(50)
    const last = Buffer.concat(errors).toString('utf8').trimEnd().split('\n').at(-1) ?? ''
    expect(JSON.parse(last)).toMatchObject({ code: 'interrupted', exit: 130 })
  })

  test('while it waits for standard input', async () => {
    const child = cli.start(['codes', '--design', design, '--points', '-'])
    // More than a pipe holds: once it is all written, the command has begun to read and waits for more.
    await new Promise((resolve) =>
      child.stdin?.write(`code,measured\n${'0,0.0000001\n'.repeat(50_000)}`, resolve),
    )
    child.kill('SIGINT')
    const [code] = await once(child, 'exit')
    expect(code).toBe(130)
  })
})

describe('L3: escape bytes', () => {
  const codes = [
    'codes',
    '--design',
    design,
    '--points',
    `${examples}/unipolar-18.points.csv`,
    '--format',
    'table',
  ]
  const onTerminal = async (env: Record<string, string>) => {
    const command = [process.execPath, cli.path, ...codes].map((word) => `'${word}'`).join(' ')
    const child = spawn('script', ['-qec', command, '/dev/null'], {
      cwd: cli.folder,
      env: { PATH: process.env.PATH ?? '', HOME: cli.folder, TERM: 'xterm', ...env },
    })
    return (await ended(child)).stdout
  }

  test('none off a terminal, whatever the format', async () => {
    for (const format of ['table', 'json', 'csv', 'ndjson']) {
      const { stdout, stderr } = await cli.run([...codes, '--format', format], {
        env: { TERM: 'xterm', FORCE_COLOR: '1' },
      })
      expect(stdout + stderr).not.toContain('\u001b')
    }
  })

  test('colour on a terminal, none with NO_COLOR or TERM=dumb', async () => {
    expect(await onTerminal({})).toContain('\u001b[32m')
    expect(await onTerminal({ NO_COLOR: '1' })).not.toContain('\u001b')
    expect(await onTerminal({ TERM: 'dumb' })).not.toContain('\u001b')
  })
})
