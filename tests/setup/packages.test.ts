import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, test } from 'vitest'

type Locked = {
  version?: string
  dev?: boolean
  devOptional?: boolean
  optional?: boolean
  os?: string[]
  integrity?: string
  resolved?: string
  hasInstallScript?: boolean
  /** It came inside another's archive, whose integrity holds it too. */
  inBundle?: boolean
}

const read = (name: string): unknown =>
  JSON.parse(readFileSync(join(import.meta.dirname, '../..', name), 'utf8'))
const { packages } = read('package-lock.json') as { packages: Record<string, Locked> }
const locked = Object.entries(packages).filter(([path]) => path !== '')
const production = locked.filter(([, one]) => !one.dev && !one.devOptional)

/** A build for another platform is locked but never installed here. */
const isForOnePlatform = ([, one]: (typeof locked)[number]) => one.os !== undefined

test('S9 at most 150 packages are installed where the product runs, none with a script to run at installation', () => {
  const installed = production.filter((one) => !isForOnePlatform(one))
  expect(installed.length).toBeGreaterThan(50)
  // Of the builds for one platform each machine installs at most two (glibc, musl).
  expect(installed.length + 2).toBeLessThanOrEqual(150)
  expect(production.filter(([, one]) => one.hasInstallScript)).toEqual([])
})

test('S9 every locked package is held to its integrity, and none names a host to fetch from', () => {
  const fetched = locked.filter(([, one]) => !one.inBundle)
  expect(fetched.filter(([, one]) => !/^sha512-/.test(one.integrity ?? '')).map(([path]) => path)).toEqual([])
  expect(locked.filter(([, one]) => one.resolved !== undefined).map(([path]) => path)).toEqual([])
})
