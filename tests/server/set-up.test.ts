import { describe, expect, it } from 'vitest'
import { commonPasswords, requireGoodPassword } from '../../server/policies/password-rules.ts'
import { limits } from '../../shared/limits.ts'
import { api, cookieOf } from '../support/server-client.ts'
import { serverHarness } from '../support/server-harness.ts'

describe('password rules', () => {
  const about = { name: 'Ada Test', email: 'ada@example.org' }
  const refused = (password: string) => {
    try {
      requireGoodPassword(password, about)
      return null
    } catch (error) {
      return (error as { code: string }).code
    }
  }

  it('ASVS V6.2.1 asks for twelve characters, counted as a person counts', () => {
    expect(refused('short enough'.slice(0, 11))).toBe('password-too-weak')
    expect(refused('kettle brass'.slice(0, 12))).toBeNull()
    expect(refused('\u{1f600}\u{1f601}\u{1f602}\u{1f603}\u{1f604}\u{1f605}')).toBe('password-too-weak')
  })

  it('ASVS V6.2.4 refuses each of the shipped common passwords, in any case', () => {
    const common = [...commonPasswords()]
    expect(common.length).toBeGreaterThanOrEqual(3_000)
    expect(common.filter((password) => password.length >= limits.passwordMin).length).toBeGreaterThan(3_000)
    for (const password of common) {
      expect(refused(password), password).toBe('password-too-weak')
      expect(refused(password.toUpperCase()), password).toBe('password-too-weak')
    }
  })

  it('refuses the person’s own name or address, and a few characters over and over', () => {
    expect(refused('ada@example.org')).toBe('password-too-weak')
    expect(refused('abababababababab')).toBe('password-too-weak')
  })
})

describe('set-up', () => {
  const strong = 'brass kettle under the stairs'

  it('ASVS V6.3.2 V6.4.1 has no default account: the first administrator needs the one-time secret', async () => {
    const fresh = await serverHarness()
    const people = await fresh.database.sql.rows('SELECT id FROM people')
    expect(people).toEqual([])
    expect((await api(fresh.url, 'get', '/setup')).body).toEqual({ open: true })
    const ask = (secret: string, password = strong) =>
      api(fresh.url, 'post', '/setup').send({ secret, name: 'Ada Test', email: 'ada@example.org', password })
    expect((await ask('guess')).body.code).toBe('setup-closed')
    const weak = await ask(fresh.deps.setup.text, 'password1234')
    expect([weak.status, weak.body.code, weak.body.errors[0].path]).toEqual([
      422,
      'password-too-weak',
      '/password',
    ])
    const both = await Promise.all([ask(fresh.deps.setup.text), ask(fresh.deps.setup.text)])
    expect(both.map((reply) => reply.status).sort()).toEqual([201, 403])
    const cookie = cookieOf(both.find((reply) => reply.status === 201)!.headers['set-cookie'])
    expect((await api(fresh.url, 'get', '/me', { cookie })).body.who).toMatchObject({ role: 'administrator' })
    expect((await api(fresh.url, 'get', '/setup')).body).toEqual({ open: false })
    expect((await ask(fresh.deps.setup.text)).body.code).toBe('setup-closed')
    expect(JSON.stringify(fresh.log)).not.toContain(fresh.deps.setup.text)
    await fresh.close()
  })

  it.each([
    ['ASVS V6.2.9 of 1,000 characters', 'long words '.repeat(90)],
    ['ASVS V6.2.9 of 64 characters', 'x1'.repeat(20) + 'y2z3'.repeat(6)],
    ['ASVS V6.2.8 with spaces at both ends and none folded', '  Ünï códe  pass\u00a0phrase  '],
    [
      'ASVS V6.2.8 with text beyond 72 bytes that differs only there',
      `${'a long stem of many words '.repeat(4)}END`,
    ],
  ])('takes a password %s exactly as typed', async (_, password) => {
    const fresh = await serverHarness()
    const made = await api(fresh.url, 'post', '/setup').send({
      secret: fresh.deps.setup.text,
      name: 'Ada Test',
      email: 'ada@example.org',
      password,
    })
    expect(made.status).toBe(201)
    const status = async (typed: string) =>
      (await api(fresh.url, 'post', '/session').send({ email: 'ada@example.org', password: typed })).status
    expect(await status(password)).toBe(200)
    expect(await status(password.slice(0, Math.min(70, password.length - 4)).trim())).toBe(401)
    expect(await status(`${password.slice(0, -1)}?`)).toBe(401)
    await fresh.close()
  })
})
