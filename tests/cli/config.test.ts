import { chmodSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeEach, describe, expect, test } from 'vitest'
import { configFile, connectionFor } from '../../cli/config.ts'
import { memoryIo } from './support/memory-io.ts'

const token = 'ogee_Ab3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
const other = 'ogee_Zz3dEf9h_abcdefghijklmnopqrstuvwxyz0123456789'
const home = mkdtempSync(join(tmpdir(), 'ogee-config-'))
const config = join(home, 'ogee/config.json')
const nothing = { url: undefined, tokenFile: undefined }
afterAll(() => rmSync(home, { recursive: true, force: true }))
beforeEach(() => rmSync(join(home, 'ogee'), { recursive: true, force: true }))

function write(text: string, mode = 0o600, path = config): string {
  mkdirSync(join(home, 'ogee'), { recursive: true })
  writeFileSync(path, text)
  chmodSync(path, mode)
  return path
}
const io = (env: Record<string, string> = {}) => memoryIo({ env: { XDG_CONFIG_HOME: home, ...env } })
const file = (url = 'http://127.0.0.1:4310') => write(JSON.stringify({ url, token }))

describe('where the server and the token come from', () => {
  test('the config file, in the XDG folder or its default', async () => {
    file()
    expect(await connectionFor(nothing, io())).toEqual({ url: 'http://127.0.0.1:4310', token })
    expect(configFile({ HOME: '/home/x' })).toBe('/home/x/.config/ogee/config.json')
    expect(configFile({ HOME: '/home/x', XDG_CONFIG_HOME: 'relative' })).toBe(
      '/home/x/.config/ogee/config.json',
    )
  })

  test('the environment goes before the file, and flags before both', async () => {
    file()
    const env = { OGEE_URL: 'http://127.0.0.1:2', OGEE_TOKEN: other }
    expect(await connectionFor(nothing, io(env))).toEqual({ url: 'http://127.0.0.1:2', token: other })
    const tokenFile = write(`${token}\n`, 0o600, join(home, 'ogee/token'))
    expect(await connectionFor({ url: 'http://127.0.0.1:3', tokenFile }, io(env))).toEqual({
      url: 'http://127.0.0.1:3',
      token,
    })
  })
})

describe('what is refused with 78, and never with the token in its words', () => {
  const refused = async (
    env: Record<string, string> = {},
    options = nothing as Parameters<typeof connectionFor>[0],
  ) => {
    const error = await connectionFor(options, io(env)).then(
      () => undefined,
      (thrown: { code: string; exit: number; message: string; cause?: unknown }) => thrown,
    )
    expect(error).toMatchObject({ code: 'configuration', exit: 78 })
    expect(`${error?.message} ${JSON.stringify(error)}`).not.toContain('abcdefghij')
    return error?.message ?? ''
  }

  test.each([0o644, 0o640, 0o604, 0o660, 0o620, 0o601])(
    'ASVS V13.3.2, L5: a config file of mode %i',
    async (mode) => {
      write(JSON.stringify({ url: 'http://127.0.0.1:1', token }), mode)
      expect(await refused()).toContain(`chmod 600 ${config}`)
    },
  )

  test('a token file that others can read', async () => {
    const tokenFile = write(token, 0o644, join(home, 'ogee/token'))
    expect(await refused({ OGEE_URL: 'http://127.0.0.1:1' }, { url: undefined, tokenFile })).toContain(
      'chmod 600',
    )
  })

  test('no server, no token', async () => {
    expect(await refused()).toContain('OGEE_URL')
    expect(await refused({ OGEE_URL: 'http://127.0.0.1:1' })).toContain('OGEE_TOKEN')
    expect(await refused({ OGEE_URL: 'http://127.0.0.1:1', OGEE_TOKEN: '' })).toContain('OGEE_TOKEN')
  })

  test('a broken config file', async () => {
    write(`{"url": "http://127.0.0.1:1", "token": "${token}",}`)
    expect(await refused()).toContain('line 1')
    write(`["${token}"]`)
    expect(await refused()).toContain('not a JSON object')
    write(JSON.stringify({ tokens: token }))
    expect(await refused()).toContain('"tokens" is not known')
    write(JSON.stringify({ token: 7 }))
    expect(await refused()).toContain('"token"')
  })

  test('what is no token', async () => {
    for (const bad of [`${token}\n${token}`, `${token} x`, 'ö', `"${token}"`]) {
      expect(await refused({ OGEE_URL: 'http://127.0.0.1:1', OGEE_TOKEN: bad })).toContain('not a token')
    }
  })

  test.each(['127.0.0.1:4310', 'ftp://127.0.0.1', 'http://127.0.0.1/api', 'http://a:b@127.0.0.1', 'x'])(
    'the address %s',
    async (url) => {
      expect(await refused({ OGEE_TOKEN: token }, { url, tokenFile: undefined })).toContain('by its origin')
    },
  )
})

test('a token file that is missing is 66', async () => {
  const options = { url: 'http://127.0.0.1:1', tokenFile: join(home, 'nothing') }
  await expect(connectionFor(options, io())).rejects.toMatchObject({ code: 'input-missing', exit: 66 })
})

test('http to another machine is warned of, without the token; loopback and https are not', async () => {
  const said = async (url: string) => {
    const memory = io({ OGEE_TOKEN: token })
    await connectionFor({ url, tokenFile: undefined }, memory)
    return memory.err()
  }
  expect(await said('http://192.0.2.7:4310')).toMatch(/warning: the token goes to 192\.0\.2\.7 in clear/)
  expect(await said('http://192.0.2.7:4310')).not.toContain(token)
  for (const url of ['http://127.0.0.1:1', 'http://localhost:1', 'http://[::1]:1', 'https://ogee.example']) {
    expect(await said(url)).toBe('')
  }
})
