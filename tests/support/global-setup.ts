import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { TestProject } from 'vitest/node'
import { startMariadb } from '../../server/setup/mariadb.mjs'

declare module 'vitest' {
  export interface ProvidedContext {
    /** Socket of the MariaDB of this run; its root signs in there without a password. */
    mariadbSocket: string
    mariadbUrl: string
  }
}

/** One MariaDB for the whole run, in a folder of its own; each test file makes itself a database in it. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const dir = mkdtempSync(join(tmpdir(), 'ogee-test-'))
  const database = await startMariadb({ dir, size: 'test' })
  project.provide('mariadbSocket', database.socket)
  project.provide('mariadbUrl', database.url)
  return async () => {
    await database.stop()
    rmSync(dir, { recursive: true, force: true })
  }
}
