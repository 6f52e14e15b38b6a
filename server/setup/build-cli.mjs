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
 * Node's own modules are taken from the process instead of imported. An import lists every export, and listing those of
 * node:fs alone loads all of its streams. commander's one for running programs as subcommands is left out: ours are functions.
 * @type {import('esbuild').Plugin}
 */
const builtinsOnUse = {
  name: 'builtins-on-use',
  setup(build) {
    build.onResolve({ filter: /^node:/ }, ({ path }) => ({ path, namespace: 'builtin' }))
    build.onLoad({ filter: /.*/, namespace: 'builtin' }, ({ path }) => ({
      contents:
        path === 'node:child_process'
          ? 'module.exports = {}'
          : `module.exports = process.getBuiltinModule(${JSON.stringify(path)})`,
    }))
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
      banner: { js: '#!/usr/bin/env node' },
      // Node reads the whole file at each start: a third fewer bytes is some hundredths of a second less.
      minifyIdentifiers: true,
      plugins: [arithmeticApart, builtinsOnUse],
    }),
    bundle({
      ...common,
      entryPoints: ['shared/quantity/arithmetic.ts'],
      outfile: join(folder, 'arithmetic.mjs'),
    }),
  ])
  chmodSync(outfile, 0o755)
}
