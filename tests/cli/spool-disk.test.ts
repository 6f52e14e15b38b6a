import fs from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { putDown } from '../../cli/spool/disk.ts'
import type { Entry } from '../../cli/spool/entry.ts'
import { Spool } from '../../cli/spool/folder.ts'
import { isOgeeError } from '../../shared/errors.ts'

/** R9, the part that a kill cannot show: what is said to be saved is durable, in this order and no other. */

let dir = ''
beforeEach(() => {
  dir = fs.mkdtempSync(join(tmpdir(), 'ogee-disk-'))
})
afterEach(() => fs.rmSync(dir, { recursive: true, force: true }))

const entryOf = (unit: string): Entry => ({
  format: 'ogee.spooled/1',
  key: `key of ${unit}`,
  savedAt: '2026-03-02T10:00:00Z',
  body: { design: 'DBS-A', unit, points: [] },
  printed: {},
})

/** What is done to files, by name, in order. */
function watched(): string[] {
  const done: string[] = []
  const names = new Map<number, string>()
  const short = (path: unknown) =>
    String(path)
      .replace(dir, '')
      .replace(/\d+-[0-9a-f]+\.part/, 'part')
      .replace(/[0-9a-z-]+\.json/, 'entry')
  const real = { ...fs }
  vi.spyOn(fs, 'openSync').mockImplementation((path, ...more) => {
    const file = real.openSync(path, ...more)
    names.set(file, short(path))
    return file
  })
  vi.spyOn(fs, 'writeFileSync').mockImplementation((file, ...more) => {
    done.push(`write ${names.get(file as number)}`)
    real.writeFileSync(file, ...more)
  })
  vi.spyOn(fs, 'fsyncSync').mockImplementation((file) => {
    done.push(`sync ${names.get(file)}`)
    real.fsyncSync(file)
  })
  vi.spyOn(fs, 'renameSync').mockImplementation((from, to) => {
    done.push(`rename ${short(from)} to ${short(to)}`)
    real.renameSync(from, to)
  })
  vi.spyOn(fs, 'unlinkSync').mockImplementation((path) => {
    done.push(`unlink ${short(path)}`)
    real.unlinkSync(path)
  })
  return done
}

const written = ['write /parts/part', 'sync /parts/part']

describe('durable first, said afterwards', () => {
  test('an entry: its bytes, then its name, then the folder', () => {
    const spool = Spool.open(dir)
    const done = watched()
    spool.add(entryOf('031'), 'place')
    expect(done).toEqual([...written, 'rename /parts/part to /pending/entry', 'sync /pending'])
  })

  test('many entries: the folder once, after the last', () => {
    const spool = Spool.open(dir)
    const done = watched()
    for (const unit of ['1', '2']) spool.add(entryOf(unit), unit, false)
    spool.sync('pending')
    expect(done.filter((line) => line === 'sync /pending')).toHaveLength(1)
    expect(done.at(-1)).toBe('sync /pending')
  })

  test('what was sent leaves pending/ only once its answer is durable in sent/', () => {
    const spool = Spool.open(dir)
    spool.add(entryOf('1'), '1')
    const [name = ''] = spool.names('pending')
    const done = watched()
    spool.sent([{ name, entry: entryOf('1') }])
    expect(done).toEqual([
      ...written,
      'rename /parts/part to /sent/entry',
      'sync /sent',
      'unlink /pending/entry',
    ])
  })
})

describe('a folder that several processes write to for long', () => {
  test('keeps the order of writing, one by one and many at a time', () => {
    const [one, other] = [Spool.open(dir), Spool.open(dir)]
    const put = (spool: Spool, unit: string, isLast = true) => spool.add(entryOf(unit), unit, isLast)
    const units = ['1', '2', '3', '4', '5', '6', '7', '8']
    put(one, '1')
    put(other, '2')
    put(other, '3')
    put(one, '4')
    for (const unit of ['5', '6']) put(other, unit, false)
    other.sync('pending')
    for (const unit of ['7', '8']) put(one, unit, false)
    one.sync('pending')
    const written = one
      .names('pending')
      .map((name) => JSON.parse(fs.readFileSync(one.path('pending', name), 'utf8')).body.unit)
    expect(written).toEqual(units)
  })

  test('a part that somebody else has made is not taken away', () => {
    const path = join(dir, 'kept.txt')
    const real = fs.openSync
    let theirs = ''
    const failing = vi.spyOn(fs, 'openSync').mockImplementationOnce((part) => {
      theirs = String(part)
      fs.closeSync(real(part, 'wx'))
      throw Object.assign(new Error('EEXIST'), { code: 'EEXIST' })
    })
    expect(() => putDown(path, 'new', dir)).toThrow('kept.txt cannot be created')
    failing.mockRestore()
    expect([fs.existsSync(theirs), fs.existsSync(path)]).toEqual([true, false])
  })

  test('no two parts have one name, whatever the number of the process', async () => {
    const parts: string[] = []
    const real = fs.openSync
    const seen = vi.spyOn(fs, 'openSync').mockImplementation((path, ...more) => {
      if (String(path).endsWith('.part')) parts.push(String(path))
      return real(path, ...more)
    })
    for (let process = 0; process < 2; process++) {
      vi.resetModules()
      const { putDown: put } = await import('../../cli/spool/disk.ts')
      put(join(dir, `${process}.txt`), 'text', dir)
    }
    seen.mockRestore()
    expect(new Set(parts).size).toBe(2)
  })

  test('a sender gives back its own lock only', async () => {
    const spool = Spool.open(dir)
    const lock = join(dir, 'sending.lock')
    await spool.alone(async () => expect(fs.existsSync(lock)).toBe(true))
    expect(fs.existsSync(lock)).toBe(false)
    await spool.alone(async () => fs.writeFileSync(lock, `${process.pid} another`))
    expect(fs.existsSync(lock)).toBe(true)
  })
})

describe('trouble with the disk', () => {
  test.each([
    ['ENOSPC', 74, 'the disk is full'],
    ['EDQUOT', 74, 'the quota is used up'],
    ['EIO', 74, 'EIO'],
    ['EACCES', 73, 'not allowed'],
    ['EROFS', 73, 'the disk is read-only'],
  ])('%s at any step is %i, and leaves nothing behind', (code, exit, words) => {
    for (const step of ['openSync', 'writeFileSync', 'fsyncSync', 'renameSync'] as const) {
      const spool = Spool.open(dir)
      const failing = vi.spyOn(fs, step).mockImplementation(() => {
        throw Object.assign(new Error(code), { code })
      })
      let thrown: unknown
      try {
        spool.add(entryOf('1'), '1')
      } catch (error) {
        thrown = error
      }
      failing.mockRestore()
      expect(isOgeeError(thrown) && [thrown.exit, thrown.message], step).toEqual([
        exit,
        expect.stringContaining(words),
      ])
      expect([spool.names('pending'), fs.readdirSync(join(dir, 'parts'))], step).toEqual([[], []])
    }
  })

  test('parts of a killed process are cleared, those of a living one are its own', () => {
    const spool = Spool.open(dir)
    fs.writeFileSync(join(dir, 'parts', '999999999-1.part'), 'half')
    fs.writeFileSync(join(dir, 'parts', `${process.pid}-77.part`), 'half')
    spool.clear()
    expect(fs.readdirSync(join(dir, 'parts'))).toEqual([`${process.pid}-77.part`])
  })

  test('a file stays as it was when its new text cannot be written', () => {
    const path = join(dir, 'kept.txt')
    putDown(path, 'old', dir)
    const failing = vi.spyOn(fs, 'fsyncSync').mockImplementation(() => {
      throw Object.assign(new Error('ENOSPC'), { code: 'ENOSPC' })
    })
    expect(() => putDown(path, 'new', dir)).toThrow('the disk is full')
    failing.mockRestore()
    expect(fs.readFileSync(path, 'utf8')).toBe('old')
  })
})
