import { join } from 'node:path'
import { build } from 'esbuild'
import { chromium } from 'playwright-core'
import { expect, test } from 'vitest'
import { SOLVER_VERSION } from '../../../shared/solver/version.ts'
import { solverDigest } from '../../support/solver-digest.ts'
import { exampleDesign, exampleNames, vector } from '../../support/solver-fixtures.ts'

const designs = exampleNames.map(exampleDesign)
const seed = 20260302

test('the numbers are those frozen for this version: a change of any bit is a new version', () => {
  const frozen = vector<{ solver: string; seed: number; digest: string; results: number }>('solver-bits.json')
  expect({ solver: SOLVER_VERSION, seed, ...solverDigest(designs, seed) }).toEqual(frozen)
})

test('the browser’s build gives the same bits as Node, minified, over hundreds of results', async () => {
  const bundle = await build({
    entryPoints: [join(import.meta.dirname, '../../support/solver-digest.ts')],
    bundle: true,
    minify: true,
    write: false,
    format: 'iife',
    globalName: 'bits',
    platform: 'browser',
  })
  const browser = await chromium.launch({
    executablePath: '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu'],
  })
  try {
    const page = await browser.newPage()
    const script = `(() => { ${bundle.outputFiles[0]!.text}; return bits.solverDigest(${JSON.stringify(designs)}, ${seed}) })()`
    expect(await page.evaluate(script)).toEqual(solverDigest(designs, seed))
  } finally {
    await browser.close()
  }
})
