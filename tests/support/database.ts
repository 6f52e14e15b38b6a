import { randomBytes } from 'node:crypto'
import { type Connection, createConnection } from 'mariadb'
import { inject } from 'vitest'
import { makeDatabase } from '../../server/setup/mariadb.mjs'

/** An empty database with an application's and an administrator's account of its own. */
export type TestDatabase = {
  name: string
  url: string
  adminUrl: string
  /** A connection as the database's root: what no account of the product can do. The caller ends it. */
  asRoot: () => Promise<Connection>
  drop: () => Promise<void>
}

/** Makes a fresh database in the MariaDB of this run. Call `drop` when the file is done. */
export async function testDatabase(): Promise<TestDatabase> {
  const name = `ogee_t_${randomBytes(6).toString('hex')}`
  const names = { app: `${name}_app`, admin: `${name}_admin` }
  const passwords = { app: randomBytes(12).toString('hex'), admin: randomBytes(12).toString('hex') }
  const asRoot = (database?: string) =>
    createConnection({ socketPath: inject('mariadbSocket'), user: 'root', ...(database ? { database } : {}) })
  const root = await asRoot()
  await makeDatabase(root, name, passwords, names)
  await root.end()
  const { host } = new URL(inject('mariadbUrl').replace('mariadb:', 'http:'))
  return {
    name,
    url: `mariadb://${names.app}:${passwords.app}@${host}/${name}`,
    adminUrl: `mariadb://${names.admin}:${passwords.admin}@${host}/${name}`,
    asRoot: () => asRoot(name),
    drop: async () => {
      const connection = await asRoot()
      await connection.query(`DROP DATABASE IF EXISTS \`${name}\``)
      for (const user of Object.values(names))
        await connection.query(`DROP USER IF EXISTS '${user}'@'127.0.0.1'`)
      await connection.end()
    },
  }
}
