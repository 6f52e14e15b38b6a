import { type Client, makeClient, usualPatience } from './client.ts'
import type { Context, Given, OptionSpec } from './command.ts'
import { type ConnectionOptions, connectionFor } from './config.ts'
import { text } from './option-values.ts'

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
