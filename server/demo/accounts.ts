import { randomInt } from 'node:crypto'
import { mkdir, open, readFile, rename } from 'node:fs/promises'
import { join } from 'node:path'
import * as z from 'zod'
import { role } from '../../shared/contract/primitives.ts'
import { newTokenParts, tokenText } from '../policies/token-text.ts'

const accountsFile = z.object({
  people: z.array(z.object({ email: z.string(), role, password: z.string() })),
  token: z.string(),
})
export type DemoAccounts = z.output<typeof accountsFile>

const people = [
  { email: 'ines.marwick@example.org', role: 'administrator' },
  { email: 'tomas.ellery@example.org', role: 'engineer' },
  { email: 'priya.sandgren@example.org', role: 'operator' },
  { email: 'noor.haldane@example.org', role: 'auditor' },
] as const

/** Names for the addresses; all invented. */
export const nameOf = (email: string) =>
  (email.split('@')[0] ?? '')
    .split('.')
    .map((part) => part[0]?.toUpperCase() + part.slice(1))
    .join(' ')

/**
 * The demo's accounts: those that a start before this one made, or new ones. The file is on disk, readable by the owner
 * alone, before anything relies on it, so that a start that was killed goes on with the same passwords.
 */
export async function demoAccounts(dataDir: string): Promise<DemoAccounts> {
  const path = join(dataDir, 'demo-accounts.json')
  const before = await readFile(path, 'utf8').catch(() => null)
  if (before !== null) return accountsFile.parse(JSON.parse(before))
  const made: DemoAccounts = {
    people: people.map((person) => ({ ...person, password: newPassword() })),
    token: tokenText(newTokenParts()),
  }
  await mkdir(dataDir, { recursive: true })
  const file = await open(`${path}.new`, 'w', 0o600)
  try {
    await file.writeFile(`${JSON.stringify(made, null, 2)}\n`)
    await file.sync()
  } finally {
    await file.close()
  }
  await rename(`${path}.new`, path)
  return made
}

/** 16 characters of 57, without look-alikes: 93 bits, and still typed without pain. */
function newPassword(): string {
  const letters = 'abcdefghijkmnpqrstuvwxyzABCDEFGHJKLMNPQRSTUVWXYZ23456789'
  const group = () => Array.from({ length: 4 }, () => letters[randomInt(letters.length)]).join('')
  return [group(), group(), group(), group()].join('-')
}
