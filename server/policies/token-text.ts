import { randomInt } from 'node:crypto'
import { crc32 } from 'node:zlib'
import { tokenPattern } from '../../shared/contract/tokens.ts'

const alphabet = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz'
const idLength = 8
const secretLength = 30
const checkLength = 6

export type TokenParts = { id: string; secret: string }

/** A new token: id, and 30 random characters of 62, which is 178 bits (ASVS V11.5.1). */
export function newTokenParts(): TokenParts {
  return { id: randomText(idLength), secret: randomText(secretLength) }
}

/** `ogee_<id><…>`: the checksum lets a scanner tell a token from a look-alike without asking anybody. */
export function tokenText({ id, secret }: TokenParts): string {
  const start = `ogee_${id}_${secret}`
  return start + checksum(start)
}

/** Takes a token apart; null when form or checksum is wrong, so that no guess of that kind reaches the database. */
export function parseTokenText(text: string): TokenParts | null {
  if (!tokenPattern.test(text)) return null
  const end = text.length - checkLength
  if (checksum(text.slice(0, end)) !== text.slice(end)) return null
  const [, id = '', rest = ''] = text.split('_')
  return { id, secret: rest.slice(0, secretLength) }
}

function checksum(text: string): string {
  let rest = crc32(text)
  let digits = ''
  for (let i = 0; i < checkLength; i++) {
    digits = alphabet[rest % 62] + digits
    rest = Math.floor(rest / 62)
  }
  return digits
}

function randomText(length: number): string {
  return Array.from({ length }, () => alphabet[randomInt(62)]).join('')
}
