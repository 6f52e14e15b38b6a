import { spawn } from 'node:child_process'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, expect, test } from 'vitest'
import { dropLock, holderOf, startOf, takeLock } from '../../server/setup/lock.mjs'

let dir = ''
let path = ''
beforeEach(() => {
  dir = mkdtempSync(join(tmpdir(), 'ogee-lock-'))
  path = join(dir, 'lock')
})
afterEach(() => rmSync(dir, { recursive: true, force: true }))

test('a live holder keeps the lock and is named', () => {
  const child = spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000)'], { stdio: 'ignore' })
  writeFileSync(path, JSON.stringify({ pid: child.pid, started: startOf(child.pid ?? 0) }))
  expect(takeLock(path)?.pid).toBe(child.pid)
  child.kill('SIGKILL')
})

test('a dead holder, another process with its number, and a torn file do not keep the lock', () => {
  for (const left of [
    JSON.stringify({ pid: 2 ** 22 + 1, started: '1' }),
    JSON.stringify({ pid: process.pid, started: '1' }),
    '{"pid":',
    '',
  ]) {
    writeFileSync(path, left)
    expect(takeLock(path, { address: 'here' })).toBeUndefined()
    expect(holderOf(path)).toMatchObject({ pid: process.pid, address: 'here' })
    dropLock(path)
    expect(holderOf(path)).toBeUndefined()
  }
})
