import { chmodSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { build as bundle } from 'esbuild'

/**
 * Builds the command line: one file that runs alone, and beside it the part for cells with arithmetic, which is big and
 * loaded only for them. What a command does not use is parsed but not run: esbuild makes `await import()` of a bundled
 * module lazy.
 */

/** @type {import('esbuild').Plugin} */
const arithmeticApart = {
  name: 'arithmetic-apart',
  setup(build) {
    build.onResolve({ filter: /\/arithmetic\.ts$/ }, ({ kind }) =>
      kind === 'dynamic-import' ? { path: './arithmetic.mjs', external: true } : undefined,
    )
  },
}

/**
 * commander can run subcommands as programs of their own; ours are functions. Loading what it would need for that takes
 * longer than everything else in it.
 * @type {import('esbuild').Plugin}
 */
const noSubprocesses = {
  name: 'no-subprocesses',
  setup(build) {
    build.onResolve({ filter: /^node:child_process$/ }, ({ importer }) =>
      /[/\\]commander[/\\]/.test(importer) ? { path: 'none', namespace: 'no-subprocesses' } : undefined,
    )
    build.onLoad({ filter: /.*/, namespace: 'no-subprocesses' }, () => ({ contents: 'module.exports = {}' }))
  },
}

/**
 * @param {string} root the checkout
 * @param {string} [folder] where the two files go
 */
export async function buildCli(root, folder = join(root, 'dist/cli')) {
  /** @type {{ version: string }} */
  const { version } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'))
  /** @type {import('esbuild').BuildOptions} */
  const common = {
    absWorkingDir: root,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    minifySyntax: true,
    minifyWhitespace: true,
    legalComments: 'none',
    logLevel: 'warning',
  }
  const outfile = join(folder, 'ogee.mjs')
  await Promise.all([
    bundle({
      ...common,
      entryPoints: ['cli/main.ts'],
      outfile,
      define: { OGEE_VERSION: JSON.stringify(version) },
      // commander is CommonJS and asks for Node's own modules, and for nothing else, by require.
      banner: { js: '#!/usr/bin/env node\nconst require = process.getBuiltinModule' },
      plugins: [arithmeticApart, noSubprocesses],
    }),
    bundle({
      ...common,
      entryPoints: ['shared/quantity/arithmetic.ts'],
      outfile: join(folder, 'arithmetic.mjs'),
    }),
  ])
  chmodSync(outfile, 0o755)
}
