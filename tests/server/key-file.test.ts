import { mkdtemp, rm } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeEach, expect, it, vi } from 'vitest'
import { rawPublicKey } from '../../server/ledger/crypto.ts'
import { adoptKeyFile, readKeyFile, writeKeyFile, writeNextKey } from '../../server/ledger/key-file.ts'

/** What was made durable or renamed, in order. */
const done: string[] = []
vi.mock('node:fs/promises', async (importOriginal) => {
  const real = await importOriginal<typeof import('node:fs/promises')>()
  return {
    ...real,
    open: async (...args: Parameters<typeof real.open>) => {
      const file = await real.open(...args)
      const sync = file.sync.bind(file)
      file.sync = async () => {
        done.push(`sync ${args[0]}`)
        await sync()
      }
      return file
    },
    rename: async (...[from, to]: Parameters<typeof real.rename>) => {
      await real.rename(from, to)
      done.push(`rename ${to}`)
    },
  }
})

const dir = await mkdtemp(join(tmpdir(), 'ogee-key-'))
afterAll(() => rm(dir, { recursive: true }))
beforeEach(() => {
  done.length = 0
})

it('makes the name of a private key durable with its bytes, and again when it takes its place', async () => {
  const path = join(dir, 'ledger.key')
  await writeKeyFile(path)
  expect(done).toEqual([`sync ${path}`, `sync ${dir}`])
  done.length = 0
  const next = await writeNextKey(path)
  expect(done).toEqual([`sync ${path}.next`, `sync ${dir}`])
  done.length = 0
  await adoptKeyFile(path, rawPublicKey(next))
  expect(done).toEqual([`rename ${path}`, `sync ${dir}`])
  expect(rawPublicKey((await readKeyFile(path))!)).toEqual(rawPublicKey(next))
})
