import { describe, expect, it } from 'vitest'
import { api } from '../support/server-client.ts'
import { addPerson, serverHarness, testPassword } from '../support/server-harness.ts'

const email = 'engineer@example.org'
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
