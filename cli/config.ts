import { OgeeError } from '../shared/errors.ts'
import { parseJson, readFileText } from './files.ts'
import type { Io } from './io.ts'

/** Where the server is and what to show it. The token never stands in an argument, a message or a log. */
export type Connection = { url: string; token: string | null }
export type ConnectionOptions = { url: string | undefined; tokenFile: string | undefined }

const configMaxBytes = 64 * 1024
const tooLarge = (path: string) => () =>
  new OgeeError('configuration', `${path} is over 64 KiB. It holds a few lines only.`)

/** The folder of the XDG base directory specification, or its default; relative ones are ignored as it says. */
export function configFile(env: Io['env']): string {
  const { XDG_CONFIG_HOME: given, HOME: home = '' } = env
  return `${given?.startsWith('/') ? given : `${home}/.config`}/ogee/config.json`
}

/** Flags go before the environment, and that before the config file. What is open to everybody needs no token. */
export async function connectionFor(
  options: ConnectionOptions,
  io: Io,
  needsToken = true,
): Promise<Connection> {
  const path = configFile(io.env)
  const config = await readConfig(path)
  const url = options.url ?? (io.env.OGEE_URL || config.url)
  if (url === undefined) {
    throw new OgeeError(
      'configuration',
      `No server is named. Set OGEE_URL, give --url, or write "url" into ${path}.`,
    )
  }
  const token = options.tokenFile
    ? usable((await secretText(options.tokenFile)).trim(), options.tokenFile)
    : usable((io.env.OGEE_TOKEN || config.token)?.trim(), io.env.OGEE_TOKEN ? 'OGEE_TOKEN' : path)
  if (token === undefined && needsToken) {
    throw new OgeeError(
      'configuration',
      `There is no token. Set OGEE_TOKEN, give --token-file, or write "token" into ${path} (mode 0600).`,
    )
  }
  const checked = checkUrl(url)
  if (token !== undefined) warnInClear(checked, io)
  return { url: checked.origin, token: token ?? null }
}

async function readConfig(path: string): Promise<{ url?: string; token?: string }> {
  const text = await secretText(path).catch((error: unknown) => {
    if (error instanceof OgeeError && error.code === 'input-missing') return undefined
    throw error
  })
  if (text === undefined) return {}
  const parsed = parsedConfig(text, path)
  const config: { url?: string; token?: string } = {}
  for (const [key, value] of Object.entries(parsed)) {
    if ((key !== 'url' && key !== 'token') || typeof value !== 'string') {
      throw new OgeeError(
        'configuration',
        `${path}: "${key}" is not known. It takes "url" and "token", texts.`,
      )
    }
    config[key] = value
  }
  return config
}

/** A broken config file is trouble of configuration, and its text, which may hold a token, is never repeated. */
function parsedConfig(text: string, path: string): object {
  let parsed: unknown
  try {
    parsed = parseJson(text, path)
  } catch (error) {
    throw new OgeeError('configuration', error instanceof OgeeError ? error.message : `${path} is not JSON.`)
  }
  if (typeof parsed === 'object' && parsed !== null && !Array.isArray(parsed)) return parsed
  throw new OgeeError('configuration', `${path} is not a JSON object such as {"url": "…", "token": "…"}.`)
}

/** The text of a file that may hold a token: nobody else may be able to read it. */
async function secretText(path: string): Promise<string> {
  const { text, mode } = await readFileText(path, configMaxBytes, tooLarge(path))
  if ((mode & 0o077) !== 0) {
    const seen = (mode & 0o777).toString(8).padStart(4, '0')
    throw new OgeeError('configuration', `${path} is open to others (mode ${seen}). Run: chmod 600 ${path}`)
  }
  return text
}

/** Only what RFC 6750 allows in a header; whether the token is right is for the server to say. */
function usable(token: string | undefined, from: string): string | undefined {
  if (token === undefined || token === '') return undefined
  if (/^[A-Za-z0-9\-._~+/]+=*$/.test(token)) return token
  throw new OgeeError(
    'configuration',
    `What stands in ${from} is not a token: it has characters that no token has.`,
  )
}

function checkUrl(text: string): URL {
  const url = URL.canParse(text) ? new URL(text) : undefined
  const isPlain =
    url && (url.pathname === '/' || url.pathname === '') && url.search === '' && url.username === ''
  if (url && isPlain && (url.protocol === 'http:' || url.protocol === 'https:')) return url
  throw new OgeeError(
    'configuration',
    'The server is named by its origin, such as https://ogee.example or http://127.0.0.1:4310.',
  )
}

const isLoopback = (host: string) => host === 'localhost' || host === '[::1]' || /^127(\.\d+){3}$/.test(host)

function warnInClear({ protocol, hostname }: URL, io: Io): void {
  if (protocol === 'http:' && !isLoopback(hostname)) {
    io.say(`ogee: warning: the token goes to ${hostname} in clear, readable on the way. Use https.`)
  }
}
