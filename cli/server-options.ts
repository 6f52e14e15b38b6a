import { OgeeError } from '../shared/errors.ts'
import { type Client, makeClient, usualPatience } from './client.ts'
import type { Context, Given, OptionSpec } from './command.ts'
import { type ConnectionOptions, connectionFor } from './config.ts'

/** What every command with a server takes. The token itself is never an argument: the process list shows those. */
export const serverOptions: readonly OptionSpec[] = [
  {
    flags: '--url <url>',
    says: 'server, such as http://127.0.0.1:4310 (else OGEE_URL, else the config file)',
  },
  {
    flags: '--token-file <file>',
    says: 'file of mode 0600 with the token (else OGEE_TOKEN, else the config file)',
    completes: 'file',
  },
]

export const serverAbout =
  'The server stands in OGEE_URL, the token in OGEE_TOKEN; or both in ogee/config.json below\n' +
  'XDG_CONFIG_HOME (default ~/.config), mode 0600: {"url": "…", "token": "…"}.'

export function readConnection({ options }: Given): ConnectionOptions {
  return { url: text(options.url), tokenFile: text(options.tokenFile) }
}

/** For what is open to everybody: a token is used when there is one, and not asked for. */
export async function connectOpen(options: ConnectionOptions, { io }: Context): Promise<Client> {
  return makeClient(await connectionFor(options, io, false), io)
}

export async function connect(
  options: ConnectionOptions,
  { io }: Context,
  fetch?: typeof globalThis.fetch,
): Promise<Client> {
  return makeClient(await connectionFor(options, io), io, usualPatience, fetch)
}

/** The value of an option as text, or nothing when it was not given. */
export function text(value: string | boolean | readonly string[] | undefined): string | undefined {
  return typeof value === 'string' ? value : undefined
}

/** A whole number within bounds, or a usage error that names the flag. */
export function wholeNumber(flag: string, value: string, least: number, most: number): number {
  const number = /^\d+$/.test(value) ? Number(value) : Number.NaN
  if (number >= least && number <= most) return number
  throw new OgeeError('usage', `${flag} takes a whole number from ${least} to ${most}; ${value} is not one.`)
}

/** One of the words offered, or a usage error that lists them. */
export function oneOf<Word extends string>(flag: string, value: string, words: readonly Word[]): Word {
  const found = words.find((word) => word === value)
  if (found !== undefined) return found
  throw new OgeeError('usage', `${flag} takes ${words.join(', ')}; ${value} is none of them.`)
}
