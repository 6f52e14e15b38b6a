import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { type Browser, type BrowserContext, chromium, type Page } from 'playwright-core'

const axeSource = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8')

/** Debian's Chromium, headless, with none of its own network traffic. */
export async function launchBrowser(): Promise<Browser> {
  return await chromium.launch({
    executablePath: '/usr/bin/chromium',
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
      '--no-first-run',
    ],
  })
}

/** A page that keeps what must not happen: console errors, failed scripts, breaches of the content security policy. */
export type WatchedPage = { page: Page; context: BrowserContext; complaints: string[] }

export async function openPage(
  browser: Browser,
  options: {
    theme?: 'light' | 'dark'
    width?: number
    height?: number
    forcedColors?: 'active' | 'none'
  } = {},
): Promise<WatchedPage> {
  const context = await browser.newContext({
    colorScheme: options.theme ?? 'light',
    forcedColors: options.forcedColors ?? 'none',
    viewport: { width: options.width ?? 1440, height: options.height ?? 900 },
  })
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
  const page = await context.newPage()
  const complaints: string[] = []
  await page.exposeFunction('cspBreach', (text: string) => complaints.push(`CSP: ${text}`))
  await page.addInitScript(() => {
    document.addEventListener('securitypolicyviolation', (event) => {
      const { cspBreach } = globalThis as unknown as { cspBreach: (text: string) => void }
      cspBreach(`${event.effectiveDirective} ${event.blockedURI} ${event.sample}`)
    })
  })
  page.on('console', (message) => {
    // A refusal that the page handles still shows as a failed resource; the status is tested where it is caused.
    if (message.type() === 'error' && !/Failed to load resource/.test(message.text()))
      complaints.push(message.text())
  })
  page.on('pageerror', (error) => complaints.push(String(error)))
  return { page, context, complaints }
}

/** Runs axe (WCAG 2.2 A and AA and best practice) on the page as it stands; one line a violation. */
export async function axeViolations(page: Page): Promise<string[]> {
  await page.evaluate(axeSource)
  return await page.evaluate(async () => {
    const { axe } = globalThis as unknown as {
      axe: {
        run: (options: object) => Promise<{
          violations: { id: string; help: string; nodes: { html: string; failureSummary?: string }[] }[]
        }>
      }
    }
    const { violations } = await axe.run({
      runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'],
    })
    return violations.flatMap(({ id, help, nodes }) =>
      nodes.map(
        ({ html, failureSummary }) => `${id}: ${help}: ${html.slice(0, 160)} ${failureSummary ?? ''}`,
      ),
    )
  })
}
