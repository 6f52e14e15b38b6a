import { afterAll, beforeAll, describe, expect, it } from 'vitest'
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
