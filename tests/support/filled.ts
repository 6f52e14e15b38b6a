import { type Connection, createConnection } from 'mariadb'
import { inject } from 'vitest'
import { loadDemo } from '../../server/demo/load-demo.ts'
import { fillRecords } from '../bench/fill/fill.ts'
import type { Harness } from './server-harness.ts'

/** Puts the demo and further records, told from it, into the database of a test. */
export async function fillHarness(harness: Harness, count: number, seed: number): Promise<void> {
  await loadDemo({ ...harness.deps, notifyLedger: () => undefined }, harness.dir, () => undefined)
  await harness.sequencer.drain()
  const asRoot = (): Promise<Connection> =>
    createConnection({
      socketPath: inject('mariadbSocket'),
      user: 'root',
      database: harness.test.name,
      permitLocalInfile: true,
    })
  const roots = [await asRoot(), await asRoot()] as const
  await fillRecords({ roots, signer: harness.deps.signer, count, seed, end: new Date() })
  for (const root of roots) await root.end()
}
