import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Browser, Page } from 'playwright-core'
import { launchBrowser } from '../support/browser.ts'
import { type TestDatabase, testDatabase } from '../support/database.ts'
import { type ServerProcess, startServer } from '../support/server-process.ts'

/** The built product with demo data, and a browser. */
export type Stage = {
  database: TestDatabase
  server: ServerProcess
  browser: Browser
  signIn: (page: Page, role: string) => Promise<void>
  close: () => Promise<void>
}

/** @param env what the site sets, over the demo's own settings */
export async function openStage(env: Readonly<Record<string, string>> = {}): Promise<Stage> {
  const database = await testDatabase()
  const dataDir = mkdtempSync(join(tmpdir(), 'ogee-e2e-'))
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    dataDir,
    env: { OGEE_LOG: 'warn', ...env },
  })
  const browser = await launchBrowser()
  return {
    database,
    server,
    browser,
    signIn: async (page, role) => {
      const person = server.accounts().people.find((one) => one.role === role)
      if (!person) throw new Error(`no demo person is ${role}`)
      await page.getByLabel('E-mail').fill(person.email)
      await page.getByLabel('Password').fill(person.password)
      await page.keyboard.press('Enter')
      await page.getByRole('navigation').first().waitFor()
    },
    close: async () => {
      await browser.close()
      await server.remove()
      await database.drop()
      rmSync(dataDir, { recursive: true, force: true })
    },
  }
}

/** The five readings of the worked example that README and examples share. */
export const readings = ['0.0000013', '2.4994998', '4.9989783', '7.4984718', '9.9979342']
