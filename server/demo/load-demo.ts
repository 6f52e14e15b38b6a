import { createDesign } from '../commands/create-design.ts'
import { createPerson } from '../commands/create-person.ts'
import { createStation } from '../commands/create-station.ts'
import { createToken } from '../commands/create-token.ts'
import { readDesign } from '../commands/read-design.ts'
import { releaseRevision } from '../commands/revisions/release-revision.ts'
import { submitRevision } from '../commands/revisions/submit-revision.ts'
import { transaction } from '../db/transaction.ts'
import type { Deps } from '../http/deps.ts'
import { hashPassword } from '../http/passwords.ts'
import { foldEmail } from '../models/person.ts'
import { parseTokenText } from '../policies/token-text.ts'
import { type DemoAccounts, demoAccounts, nameOf } from './accounts.ts'
import { demoDesigns } from './demo-designs.ts'
import { calibrate } from './demo-instruments.ts'
import { loadFindings } from './load-findings.ts'
import { loadLots } from './load-lots.ts'

type DemoDeps = Pick<Deps, 'database' | 'signer' | 'now' | 'notifyLedger'>

/**
 * Loads the demo scenario, once.
 * Guarantee: each step finds out whether it was done, records go by fixed idempotency keys, and the mark is set last; so a
 * start that is killed goes on where it was. An installation that has people of its own is left alone.
 */
export async function loadDemo(deps: DemoDeps, dataDir: string, say: (line: string) => void): Promise<void> {
  const begun = await begin(deps)
  if (begun === null) return
  const accounts = await demoAccounts(dataDir)
  const dayMs = 86_400_000
  const foundedAt = new Date(begun.getTime() - 731 * dayMs)
  await loadPeople(deps, accounts, foundedAt)
  const stations = await loadStations(deps, foundedAt)
  await loadDesigns(deps, foundedAt)
  await loadToken(deps, accounts, stations.A.id)
  await loadLots(deps, begun, stations)
  for (const station of ['A', 'B'] as const) await calibrate(deps, station, begun, begun)
  await loadFindings(deps, begun)
  await deps.database.sql.run("UPDATE settings SET value = 'loaded' WHERE name = 'demo'")
  deps.notifyLedger()
  sayAccounts(accounts, dataDir, say)
}

/** When loading began, which everything is dated from; null when there is nothing to do. */
async function begin({ database, now }: DemoDeps): Promise<Date | null> {
  return transaction(database, async (sql) => {
    const [mark] = await sql.rows<{ value: string }>(
      "SELECT value FROM settings WHERE name = 'demo' FOR UPDATE",
    )
    if (mark?.value === 'loaded') return null
    if (mark) return new Date(mark.value)
    const people = await sql.rows('SELECT 1 AS found FROM people LIMIT 1')
    if (people.length > 0) return null
    const at = now()
    await sql.run('INSERT INTO settings (name, value) VALUES ?', [[['demo', at.toISOString()]]])
    return at
  })
}

async function loadPeople({ database }: DemoDeps, accounts: DemoAccounts, at: Date): Promise<void> {
  await Promise.all(
    accounts.people.map(async ({ email, role, password }) => {
      const passwordHash = await hashPassword(password)
      await transaction(database, async (sql) => {
        const there = await database.models.people.findOne({
          where: { emailFolded: foldEmail(email) },
          ...sql.within,
        })
        if (there) return
        await createPerson(database.models, sql, {
          name: nameOf(email),
          email,
          role,
          passwordHash,
          at,
          by: 'demo data',
        })
      })
    }),
  )
}

type Stations = Record<'A' | 'B', { id: string; name: string }>

async function loadStations(deps: DemoDeps, at: Date): Promise<Stations> {
  const load = async (name: string) => {
    const there = (await deps.database.models.stations.findOne({ where: { name } }))?.get()
    return there ?? createStation({ ...deps, now: () => at }, name)
  }
  return { A: await load('Station A'), B: await load('Station B') }
}

/** Written by one, released by another, as the rules ask. */
async function loadDesigns(deps: DemoDeps, at: Date): Promise<void> {
  const dated = { ...deps, now: () => at }
  const author = {
    kind: 'person',
    id: '00000000-0000-7000-8000-000000000000',
    name: 'Jonas Averill',
  } as const
  const engineer = (await deps.database.models.people.findOne({ where: { role: 'engineer' } }))?.get()
  if (!engineer) throw new Error('The demo has no engineer.')
  for (const { key, document } of demoDesigns) {
    const state = async () => (await readDesign(deps.database, key))?.revisions[0]?.state
    const first = { key, number: 1, ifMatch: null }
    if ((await state()) === undefined) await createDesign(dated, { key, document, author })
    if ((await state()) === 'draft') await submitRevision(dated, { ...first, by: author })
    if ((await state()) === 'in-review') {
      await releaseRevision(dated, { ...first, by: { kind: 'person', id: engineer.id, name: engineer.name } })
    }
  }
}

async function loadToken(deps: DemoDeps, accounts: DemoAccounts, station: string): Promise<void> {
  const parts = parseTokenText(accounts.token)
  if (!parts) throw new Error('demo-accounts.json holds no token.')
  if (await deps.database.models.tokens.findByPk(parts.id)) return
  const scopes = ['designs:read', 'trims:write', 'trims:read', 'trims:read-all', 'ledger:read'] as const
  const asked = { name: 'Demo script', station, scopes: [...scopes], designs: null, days: 366 }
  await createToken(deps, asked, 'demo data', parts)
}

function sayAccounts(accounts: DemoAccounts, dataDir: string, say: (line: string) => void): void {
  say(`Demo data are loaded. These accounts are also kept in ${dataDir}/demo-accounts.json:`)
  for (const { role, email, password } of accounts.people) say(`  ${role.padEnd(14)} ${email}  ${password}`)
  say(`  token          ${accounts.token}`)
}
