import { describe, expect, it } from 'vitest'
import { readConfig, servedOverTls } from '../../server/config.ts'

const url = 'mariadb://u:p@127.0.0.1:3306/ogee'

describe('configuration', () => {
  it('needs a database and nothing else', () => {
    expect(readConfig({ DATABASE_URL: url })).toMatchObject({
      port: 4310,
      host: '127.0.0.1',
      baseUrl: null,
      tls: null,
      trustedHops: 0,
      adminUrl: null,
      ledgerName: null,
      demo: false,
      selfRelease: false,
      dev: false,
      log: 'info',
      dataDir: expect.stringMatching(/\.data$/),
      keyFile: expect.stringMatching(/\.data.ledger\.key$/),
    })
  })

  it.each([
    [{}, 'DATABASE_URL is missing'],
    [{ DATABASE_URL: 'postgres://x/y' }, 'DATABASE_URL is not of the form'],
    [{ DATABASE_URL: 'mariadb://u@h/' }, 'names no database'],
    [{ PORT: 'http' }, 'PORT is not a port'],
    [{ PORT: '70000' }, 'PORT'],
    [{ OGEE_BASE_URL: 'ogee.example' }, 'OGEE_BASE_URL'],
    [{ OGEE_BASE_URL: 'http://x/y' }, 'without a path'],
    [{ OGEE_BASE_URL: 'https://x' }, 'OGEE_TRUST_PROXY'],
    [{ OGEE_TLS_CERT: 'c.pem' }, 'go together'],
    [{ OGEE_LEDGER_NAME: 'with space' }, 'OGEE_LEDGER_NAME'],
    [{ OGEE_LOG: 'loud' }, 'OGEE_LOG'],
    [{ OGEE_DEMO: 'yes' }, 'OGEE_DEMO'],
  ])('says of %j what is wrong, in one sentence, and ends with 78', (change, said) => {
    const variables =
      Object.keys(change).includes('DATABASE_URL') || Object.keys(change).length === 0
        ? change
        : { DATABASE_URL: url, ...change }
    expect(() => readConfig(variables)).toThrow(
      expect.objectContaining({ code: 'configuration', exit: 78, message: expect.stringContaining(said) }),
    )
  })

  it('lets an author release where the site says so, and in the demo unless it says no', () => {
    const of = (change: object) => readConfig({ DATABASE_URL: url, ...change }).selfRelease
    expect(of({ OGEE_SELF_RELEASE: '1' })).toBe(true)
    expect(of({ OGEE_DEMO: '1' })).toBe(true)
    expect(of({ OGEE_DEMO: '1', OGEE_SELF_RELEASE: '0' })).toBe(false)
    expect(of({ OGEE_DEMO: '0', OGEE_SELF_RELEASE: '' })).toBe(false)
  })

  it('takes an empty variable for an absent one', () => {
    expect(readConfig({ DATABASE_URL: url, PORT: '', OGEE_BASE_URL: '' }).port).toBe(4310)
  })

  it('knows when browsers come over TLS', () => {
    const of = (change: object) => servedOverTls(readConfig({ DATABASE_URL: url, ...change }))
    expect(of({})).toBe(false)
    expect(of({ OGEE_TLS_CERT: 'c', OGEE_TLS_KEY: 'k' })).toBe(true)
    expect(of({ OGEE_BASE_URL: 'https://ogee.example', OGEE_TRUST_PROXY: '1' })).toBe(true)
    expect(of({ OGEE_BASE_URL: 'http://ogee.example' })).toBe(false)
  })
})
