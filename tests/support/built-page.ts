import { readFileSync } from 'node:fs'
import { extname, join, normalize } from 'node:path'
import type { Browser, Route } from 'playwright-core'
import type { Role } from '../../shared/contract/primitives.ts'
import { openPage, type WatchedPage } from './browser.ts'
import { designLine, me, revision } from './web-fixtures.ts'

/** The built pages with a server that is answered from fixtures: each state of a page, without bringing a server to it. */

const web = join(import.meta.dirname, '../../dist/web')
export const builtOrigin = 'http://built.test'
const types: Readonly<Record<string, string>> = {
  '.html': 'text/html',
  '.js': 'text/javascript',
  '.css': 'text/css',
  '.svg': 'image/svg+xml',
  '.woff2': 'font/woff2',
}

/** JSON, a refusal with its status, or no answer at all. */
export type Reply = object | { problem: object & { status: number } } | 'never'

type Options = Parameters<typeof openPage>[1] & {
  role?: Role
  /** By path under /api/v1; what is not named is an empty page of a list. */
  replies?: Readonly<Record<string, Reply>>
  /** Whole pages of the test's own, by path. */
  pages?: Readonly<Record<string, string>>
}

export async function openBuilt(
  browser: Browser,
  path: string,
  { role = 'engineer', replies = {}, pages = {}, ...look }: Options = {},
): Promise<WatchedPage> {
  const opened = await openPage(browser, look)
  const known: Readonly<Record<string, Reply>> = {
    '/me': me(role),
    '/designs': { items: [designLine], next: null },
    '/designs/DBS-A': designLine,
    '/designs/DBS-A/revisions/1': revision(1),
    '/designs/DBS-A/revisions/2': revision(2),
    ...replies,
  }
  await opened.page.route('**/*', async (route) => {
    const { pathname } = new URL(route.request().url())
    if (pathname.startsWith('/api/v1/')) return answer(route, known[pathname.replace('/api/v1', '')])
    const own = pages[pathname]
    if (own !== undefined) return route.fulfill({ status: 200, contentType: 'text/html', body: own })
    const file = extname(pathname) === '' ? '/index.html' : normalize(pathname)
    return route.fulfill({
      status: 200,
      contentType: types[extname(file)] ?? 'application/octet-stream',
      body: readFileSync(join(web, file)),
    })
  })
  await opened.page.goto(`${builtOrigin}${path}`)
  return opened
}

async function answer(route: Route, reply: Reply | undefined): Promise<void> {
  if (reply === 'never') return
  if (reply !== undefined && 'problem' in reply) {
    const { problem } = reply as { problem: { status: number } }
    return route.fulfill({
      status: problem.status,
      contentType: 'application/problem+json',
      body: JSON.stringify(problem),
    })
  }
  return route.fulfill({ status: 200, json: reply ?? { items: [], next: null } })
}
