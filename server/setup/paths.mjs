import { mkdirSync } from 'node:fs'
import { dirname, join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'

/** The checkout, wherever the command was typed. */
export const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..')

/** The data folder, made on first use and open to nobody else: it holds keys and passwords. */
export function dataDir() {
  const dir = resolve(root, process.env.OGEE_DATA_DIR ?? '.data')
  mkdirSync(dir, { recursive: true, mode: 0o700 })
  return dir
}

export const mariadbd = '/usr/sbin/mariadbd'
export const mariadbInstall = '/usr/bin/mariadb-install-db'
export const chromium = '/usr/bin/chromium'

/** @param {string} name */
export const inRoot = (name) => join(root, name)
