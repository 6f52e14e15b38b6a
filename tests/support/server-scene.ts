import { mkdirSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { api, signIn } from './server-client.ts'
import { unipolar } from './server-factories.ts'
import { addDesign, addPerson, addStation, addToken, type Harness, serverHarness } from './server-harness.ts'

/** A server as most tests want it: a page, two designs, two stations with a token each, and people. */
export type Scene = {
  harness: Harness
  url: string
  station: { token: string }
  other: { token: string }
  admin: { cookie: string }
  engineer: { cookie: string }
  operator: { cookie: string }
  /** How the only place of a unit stands. */
  currentOf: (serial: string) => Promise<Record<string, unknown>>
}

export async function serverScene(): Promise<Scene> {
  const harness = await serverHarness()
  const { url } = harness
  addPage(harness.deps.config.webRoot)
  await addDesign(harness, 'U18')
  const ranges = [
    { id: 'u10', lowV: 0, highV: 10 },
    { id: 'u5', lowV: 0, highV: 5 },
  ]
  await addDesign(harness, 'TWO', unipolar({ channels: ['a', 'b'], ranges }))
  const a = await addStation(harness, 'Station A')
  const b = await addStation(harness, 'Station B')
  const scopes = ['trims:write', 'trims:read', 'designs:read'] as const
  const station = await addToken(harness, [...scopes], a.id)
  const cookieOf = async (role: 'administrator' | 'engineer' | 'operator') => {
    await addPerson(harness, role)
    return { cookie: await signIn(url, `${role}@example.org`) }
  }
  return {
    harness,
    url,
    station,
    other: await addToken(harness, [...scopes], b.id),
    admin: await cookieOf('administrator'),
    engineer: await cookieOf('engineer'),
    operator: await cookieOf('operator'),
    currentOf: async (serial) =>
      (await api(url, 'get', `/units?serial=${serial}`, station)).body.items[0].current[0],
  }
}

function addPage(webRoot: string): void {
  mkdirSync(join(webRoot, 'assets'), { recursive: true })
  writeFileSync(join(webRoot, 'index.html'), '<!doctype html><title>Ogee</title><div id="root"></div>')
  writeFileSync(join(webRoot, 'assets/app-1a2b3c.js'), 'export {}')
  writeFileSync(join(webRoot, 'favicon.svg'), '<svg xmlns="http://www.w3.org/2000/svg"/>')
}
