import { createHash } from 'node:crypto'
import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { build as bundle } from 'esbuild'
import { build as buildWeb } from 'vite'
import { buildCli } from './build-cli.mjs'
import { inRoot, root } from './paths.mjs'

/** Builds web, server and command line into dist/, unless what is there was built from these very files. */

/** @param {string} path */
function* filesBelow(path) {
  if (!existsSync(path)) return
  /** @type {string[]} */
  const entries = readdirSync(path, { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name))
    .sort()
  yield* entries
}

function sourceHash() {
  const hash = createHash('sha256')
  const single = ['package-lock.json', 'package.json', 'vite.config.ts', 'tsconfig.json', 'index.html'].map(
    inRoot,
  )
  const folders = ['src', 'server', 'cli', 'shared', 'public'].flatMap((name) => [
    ...filesBelow(inRoot(name)),
  ])
  for (const file of [...single, ...folders]) {
    if (existsSync(file))
      hash.update(file.slice(root.length)).update('\0').update(readFileSync(file)).update('\0')
  }
  return hash.digest('hex')
}

/**
 * What package.json lists under "dependencies" is loaded at run time; the small ones under "devDependencies" that the
 * server uses are built in, so that fewer packages are installed where it runs.
 */
async function buildServer() {
  /** @type {{ dependencies: Record<string, string> }} */
  const { dependencies } = JSON.parse(readFileSync(inRoot('package.json'), 'utf8'))
  await bundle({
    absWorkingDir: root,
    entryPoints: { main: 'server/main.ts' },
    outdir: 'dist/server',
    outExtension: { '.js': '.mjs' },
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    external: [...Object.keys(dependencies), 'vite'],
    // CommonJS packages that are built in ask for Node's modules by require.
    banner: {
      js: "import { createRequire as requireFrom } from 'node:module'; const require = requireFrom(import.meta.url);",
    },
    // What is loaded on first use stands in a file of its own.
    splitting: true,
    loader: { '.txt': 'text' },
    logLevel: 'warning',
  })
}

const stamp = inRoot('dist/.built-from')
const wanted = sourceHash()
if (!existsSync(stamp) || readFileSync(stamp, 'utf8') !== wanted) {
  process.stderr.write('ogee: building\n')
  rmSync(inRoot('dist'), { recursive: true, force: true })
  await Promise.all([buildWeb({ root, logLevel: 'warn' }), buildServer(), buildCli(root)])
  writeFileSync(stamp, wanted)
}
