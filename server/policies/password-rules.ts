import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { projectRoot } from '../root.ts'

let common: ReadonlySet<string> | undefined

/** Passwords that guessers try first, lower case, one a line (ASVS V6.2.4). */
export function commonPasswords(): ReadonlySet<string> {
  common ??= new Set(
    readFileSync(join(projectRoot, 'server/policies/common-passwords.txt'), 'utf8')
      .split('\n')
      .filter((line) => line !== '' && !line.startsWith('# ')),
  )
  return common
}

/** Length and commonness decide; no composition rules. Throws `password-too-weak` with what to change. */
export function requireGoodPassword(password: string, about: { name: string; email: string }): void {
  const refuse = (message: string) => {
    throw new OgeeError('password-too-weak', message, { errors: [{ path: '/password', message }] })
  }
  const characters = [...password].length
  if (characters < limits.passwordMin) {
    refuse(`The password has ${characters} characters; use ${limits.passwordMin} or more, better 15.`)
  }
  const folded = password.toLowerCase()
  if (commonPasswords().has(folded))
    refuse('That password is among those that guessers try first. Use another.')
  const own = [about.email, about.email.split('@')[0] ?? '', about.name].map((text) => text.toLowerCase())
  if (own.includes(folded)) refuse('The password is your name or address. Use another.')
  if (new Set(folded).size < 4) refuse('The password repeats the same few characters. Use another.')
}
