import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { commonPasswords, requireGoodPassword } from '../../server/policies/password-rules.ts'
import { limits } from '../../shared/limits.ts'
import { api, cookieOf, signIn } from '../support/server-client.ts'
import { addPerson, type Harness, serverHarness, testPassword } from '../support/server-harness.ts'

let harness: Harness
let url: string
const email = 'engineer@example.org'

beforeAll(async () => {
  harness = await serverHarness()
  url = harness.url
  await addPerson(harness, 'engineer')
  await addPerson(harness, 'auditor')
})
afterAll(() => harness.close())

const me = async (cookie: string) => (await api(url, 'get', '/me', { cookie })).status
const minute = 60_000

async function atTime<T>(shiftMs: number, work: () => Promise<T>): Promise<T> {
  harness.clock.shiftMs += shiftMs
  try {
    return await work()
  } finally {
    harness.clock.shiftMs -= shiftMs
  }
}

describe('the session cookie', () => {
  it('ASVS V3.3.2 V3.3.4 is SameSite=Strict and HttpOnly, of this host, and ends with the browser', async () => {
    const reply = await api(url, 'post', '/session').send({ email, password: testPassword })
    const [cookie] = reply.headers['set-cookie'] as unknown as string[]
    expect(cookie).toMatch(/^ogee=[^;]+; Path=\/; HttpOnly; SameSite=Strict$/)
    const value = cookieOf([cookie]).slice('ogee='.length)
    expect(JSON.stringify(reply.body)).not.toContain(value)
    expect(JSON.stringify(harness.log)).not.toContain(value.slice(0, 20))
  })

  it('ASVS V7.2.3 holds a reference of 128 random bits or more, signed outside the database', async () => {
    const ids = new Set<string>()
    for (let i = 0; i < 3; i++) {
      const cookie = decodeURIComponent(await signIn(url, email))
      const id = /^ogee=s:([\w-]+)\./.exec(cookie)![1]!
      expect(id.length * 6).toBeGreaterThanOrEqual(128)
      ids.add(id)
      // What a database dump shows is not enough to sign in.
      expect(await me(`ogee=${id}`)).toBe(401)
      expect(await me(`ogee=s%3A${id}.AAAA`)).toBe(401)
    }
    expect(ids.size).toBe(3)
  })

  it('ASVS V7.2.4 gets a new reference at sign-in, and the one before ends', async () => {
    const before = await signIn(url, email)
    const again = await api(url, 'post', '/session', { cookie: before }).send({
      email,
      password: testPassword,
    })
    const after = cookieOf(again.headers['set-cookie'])
    expect(after).not.toBe(before)
    expect(await me(before)).toBe(401)
    expect(await me(after)).toBe(200)
  })

  it('ASVS V7.4.1 ends at the server with sign-out: the old cookie is worth nothing', async () => {
    const cookie = await signIn(url, email)
    expect(await me(cookie)).toBe(200)
    const out = await api(url, 'delete', '/session', { cookie })
    expect(out.status).toBe(204)
    expect((out.headers['set-cookie'] as unknown as string[])[0]).toMatch(/^ogee=;.*Expires=Thu, 01 Jan 1970/)
    expect(await me(cookie)).toBe(401)
  })

  it('ASVS V7.3.1 ends when nobody used it for an hour', async () => {
    const cookie = await signIn(url, email)
    expect(await atTime((limits.sessionIdleMinutes - 1) * minute, () => me(cookie))).toBe(200)
    // Used just then: so it holds for another hour, and no longer.
    const later = (2 * limits.sessionIdleMinutes - 2) * minute
    expect(await atTime(later, () => me(cookie))).toBe(200)
    expect(await atTime(later + (limits.sessionIdleMinutes + 1) * minute, () => me(cookie))).toBe(401)
    expect(await me(cookie), 'and stays ended').toBe(401)
  })

  it('ASVS V7.3.2 ends after twelve hours however busy', async () => {
    const cookie = await signIn(url, email)
    const halfHours = limits.sessionAbsoluteHours * 2
    for (let i = 1; i < halfHours; i++)
      expect(await atTime(i * 30 * minute, () => me(cookie)), `half hour ${i}`).toBe(200)
    expect(await atTime(halfHours * 30 * minute + minute, () => me(cookie))).toBe(401)
  })

  it('ASVS V7.4.2 ends at once when the person is disabled, and follows a change of role', async () => {
    const person = await addPerson(harness, 'operator', 'leaver@example.org')
    const cookie = await signIn(url, 'leaver@example.org')
    const { people } = harness.database.models
    await people.update({ role: 'auditor' }, { where: { id: person.id } })
    expect((await api(url, 'get', '/me', { cookie })).body.who.role).toBe('auditor')
    await people.update({ disabledAt: new Date() }, { where: { id: person.id } })
    expect(await me(cookie)).toBe(401)
    const again = await api(url, 'post', '/session').send({
      email: 'leaver@example.org',
      password: testPassword,
    })
    expect([again.status, again.body.code]).toEqual([401, 'wrong-password'])
  })
})

describe('sign-in', () => {
  it('knows the address in any case, the password exactly', async () => {
    await signIn(url, 'ENGINEER@Example.org')
    for (const password of [
      testPassword.toUpperCase(),
      ` ${testPassword}`,
      `${testPassword} `,
      testPassword.slice(0, -1),
    ]) {
      const reply = await api(url, 'post', '/session').send({ email: 'auditor@example.org', password })
      expect([reply.status, reply.body.code]).toEqual([401, 'wrong-password'])
    }
  })

  it('answers the same for an unknown person as for a wrong password', async () => {
    const answer = async (who: string) => {
      const { status, body, headers } = await api(url, 'post', '/session').send({
        email: who,
        password: 'wrong password',
      })
      const { instance: _, ...rest } = body
      return { status, rest, challenge: headers['www-authenticate'], cookie: headers['set-cookie'] }
    }
    const known = await answer('auditor@example.org')
    expect(await answer('nobody-at-all@example.org')).toEqual(known)
    expect(known).toMatchObject({ status: 401, challenge: 'Bearer realm="ogee"', cookie: undefined })
  })

  it('S7 hashes for an unknown person too, so that the time tells nothing', async () => {
    const timeOf = async (who: string) => {
      const start = performance.now()
      await api(url, 'post', '/session').send({ email: who, password: 'wrong password' })
      return performance.now() - start
    }
    const known: number[] = []
    const unknown: number[] = []
    for (let i = 0; i < 3; i++) {
      known.push(await timeOf('auditor@example.org'))
      unknown.push(await timeOf(`nobody-${i}@example.org`))
    }
    // Not a race: an answer without hashing takes a tenth of one with.
    expect(Math.min(...unknown)).toBeGreaterThan(Math.min(...known) / 4)
  })
})

describe('ASVS V11.4.2 stored passwords', () => {
  it('are argon2id with 64 MiB, three passes, one lane', async () => {
    const rows = await harness.database.sql.rows<{ hash: string }>('SELECT password_hash AS hash FROM people')
    for (const { hash } of rows)
      expect(hash).toMatch(/^\$argon2id\$v=19\$m=65536,t=3,p=1\$[\w+/]{22,}\$[\w+/]{43}$/)
    expect(new Set(rows.map((row) => row.hash.split('$')[4])).size).toBeGreaterThan(0)
  })
})

describe('ASVS V6.3.1 guessing', () => {
  it('is slowed by account and address, tells when to try again, and leaves other accounts alone', async () => {
    const slow = await serverHarness({
      quotas: { failedSignInsPerAccountAndAddress: 4, failedSignInsPerAddress: 12 },
    })
    await addPerson(slow, 'engineer')
    await addPerson(slow, 'auditor')
    const guess = (who: string, password: string) =>
      api(slow.url, 'post', '/session').send({ email: who, password })
    for (let i = 0; i < 4; i++) expect((await guess(email, `guess number ${i}`)).status).toBe(401)
    const refused = await guess(email, testPassword)
    expect([refused.status, refused.body.code]).toEqual([429, 'too-many-requests'])
    expect(Number(refused.headers['retry-after'])).toBeGreaterThan(0)
    // Another spelling of the same account is the same account; another account is not.
    expect((await guess('Engineer@EXAMPLE.org', testPassword)).status).toBe(429)
    expect((await guess('auditor@example.org', testPassword)).status).toBe(200)
    for (let i = 0; i < 20; i++) await guess(`stuffed-${i}@example.org`, 'a stolen password')
    expect((await guess('auditor@example.org', testPassword)).status).toBe(429)
    await slow.close()
  })

  it('from elsewhere never locks the owner out', async () => {
    const behind = await serverHarness({
      quotas: { failedSignInsPerAccountAndAddress: 3 },
      config: { trustedHops: 1 },
    })
    await addPerson(behind, 'engineer')
    const from = (address: string, password: string) =>
      api(behind.url, 'post', '/session', { headers: { 'X-Forwarded-For': address } }).send({
        email,
        password,
      })
    for (let i = 0; i < 5; i++) await from('203.0.113.7', `guess number ${i}`)
    expect((await from('203.0.113.7', testPassword)).status).toBe(429)
    expect((await from('198.51.100.9', testPassword)).status).toBe(200)
    await behind.close()
  })

  it('ASVS V4.1.3 is not escaped by a forged X-Forwarded-For, which gets into no log either', async () => {
    const direct = await serverHarness({ quotas: { failedSignInsPerAccountAndAddress: 3 } })
    await addPerson(direct, 'engineer')
    const statuses: number[] = []
    for (let i = 0; i < 5; i++) {
      const reply = await api(direct.url, 'post', '/session', {
        headers: {
          'X-Forwarded-For': `203.0.113.${i}`,
          'X-Forwarded-Proto': 'https',
          'X-Forwarded-Host': 'evil.example',
        },
      }).send({ email, password: `guess number ${i}` })
      statuses.push(reply.status)
    }
    expect(statuses).toEqual([401, 401, 401, 429, 429])
    expect(JSON.stringify(direct.log)).not.toContain('203.0.113')
    await direct.close()
  })
})

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
