import { existsSync, readFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

/** The project's folder: the nearest one above that holds package.json, from source and from the built file alike. */
export const projectRoot = findRoot(dirname(fileURLToPath(import.meta.url)))

export const productVersion = readVersion()

function findRoot(from: string): string {
  if (existsSync(join(from, 'package.json'))) return from
  const up = dirname(from)
  if (up === from) throw new Error('No package.json above the server.')
  return findRoot(up)
}

function readVersion(): string {
  const parsed: unknown = JSON.parse(readFileSync(join(projectRoot, 'package.json'), 'utf8'))
  const { version } = parsed as { version?: unknown }
  return typeof version === 'string' ? version : '0.0.0'
}
