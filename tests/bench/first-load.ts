import { readdirSync, readFileSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { gzipSync } from 'node:zlib'
import type { BenchRow } from './row.ts'

/**
 * P7, first-load JavaScript by route: what the entry and a route's own chunks weigh, gzip, following static imports only. Read
 * from the build itself; the browser test measures the same over the wire.
 */
const assets = join(import.meta.dirname, '../../dist/web/assets')

const frame = /^frame-.*\.js$/
const routes: readonly [name: string, chunks: readonly RegExp[], limitKb: number][] = [
  ['sign-in', [/^sign-in-screen-.*\.js$/], 130],
  ['Bench', [frame, /^bench-screen-.*\.js$/], 185],
  ['History', [frame, /^history-screen-.*\.js$/], 185],
  ['record', [frame, /^record-screen-.*\.js$/, /^record-drawn-.*\.js$/], 185],
  ['designs', [frame, /^designs-screen-.*\.js$/], 185],
  ['design', [frame, /^design-screen-.*\.js$/], 185],
  ['lots', [frame, /^lots-screen-.*\.js$/], 185],
  [
    'lot, with what it draws by itself',
    [frame, /^lot-screen-.*\.js$/, /^lot-drawn-.*\.js$/, /^station-line-.*\.js$/],
    185,
  ],
  ['ledger', [frame, /^ledger-screen-.*\.js$/], 185],
  ['tokens', [frame, /^tokens-screen-.*\.js$/], 185],
  ['stations', [frame, /^stations-screen-.*\.js$/], 185],
]

/** A chunk and all that it imports statically. */
function closure(names: readonly string[]): Set<string> {
  const seen = new Set<string>()
  const open = [...names]
  for (let name = open.pop(); name !== undefined; name = open.pop()) {
    if (seen.has(name)) continue
    seen.add(name)
    const text = readFileSync(join(assets, name), 'utf8')
    for (const [, to = ''] of text.matchAll(/(?:from|import)\s*["']\.\/([^"']+\.js)["']/g)) open.push(to)
  }
  return seen
}

export async function benchFirstLoad(): Promise<readonly BenchRow[]> {
  const html = readFileSync(join(assets, '../index.html'), 'utf8')
  const entries = [...html.matchAll(/assets\/([^"']+\.js)/g)].map(([, name = '']) => name)
  const files = readdirSync(assets).filter((name) => statSync(join(assets, name)).isFile())
  return routes.map(([name, patterns, limit]) => {
    const own = patterns.map((pattern) => {
      const found = files.filter((file) => pattern.test(file))
      if (found.length !== 1) throw new Error(`no single chunk ${pattern} for the route ${name}`)
      return found[0]!
    })
    const kb =
      [...closure([...entries, ...own])].reduce(
        (sum, file) => sum + gzipSync(readFileSync(join(assets, file))).length,
        0,
      ) / 1000
    return {
      id: 'P7',
      name: `first-load JavaScript, ${name}, kB gzip`,
      ours: kb.toFixed(1),
      peer: String(limit),
      ratio: kb / limit,
      goal: '<= 1.00',
      met: kb <= limit,
    }
  })
}
