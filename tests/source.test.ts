import { execFileSync } from 'node:child_process'
import { existsSync, readFileSync } from 'node:fs'
import { dirname, join, normalize } from 'node:path'
import { describe, expect, test } from 'vitest'

/** Reads our own code and holds it to DEVELOPERS.md, so that a rule on that page is a rule and not a wish. */

const root = join(import.meta.dirname, '..')
const tracked = execFileSync('git', ['ls-files', '--cached', '--others', '--exclude-standard'], {
  cwd: root,
  encoding: 'utf8',
})
  .split('\n')
  .filter((file) => file !== '' && existsSync(join(root, file)))
const code = tracked.filter((file) => /^(src|server|cli|shared|tests)\/.*\.(ts|tsx|mjs)$/.test(file))
const product = code.filter((file) => !file.startsWith('tests/'))
const text = (file: string) => readFileSync(join(root, file), 'utf8')

const importsOf = (file: string) =>
  [...text(file).matchAll(/(?:from|import)\s*\(?\s*'(\.[^']+)'/g)].map(([, to = '']) =>
    normalize(join(dirname(file), to.replace(/\?.*$/, ''))),
  )

const graph = new Map(product.map((file) => [file, importsOf(file)]))

/** Which folders a folder may import from, itself apart. */
const mayImport: Record<string, readonly string[]> = {
  shared: [],
  server: ['shared'],
  cli: ['shared'],
  src: ['shared'],
}

describe('dependency direction', () => {
  test('the four parts import only what the folder map allows', () => {
    const wrong = [...graph].flatMap(([file, targets]) => {
      const own = file.split('/')[0] ?? ''
      return targets
        .map((target) => target.split('/')[0] ?? '')
        .filter((top) => top !== own && !mayImport[own]?.includes(top))
        .map((top) => `${file} imports ${top}`)
    })
    expect(wrong).toEqual([])
  })

  test('the solver knows only units, limits and errors', () => {
    const allowed = /^shared\/(solver\/|units\.ts$|limits\.ts$|errors\.ts$)/
    const wrong = [...graph].flatMap(([file, targets]) =>
      file.startsWith('shared/solver/')
        ? targets.filter((target) => !allowed.test(target)).map((target) => `${file} imports ${target}`)
        : [],
    )
    expect(wrong).toEqual([])
  })

  test('nothing in the server imports routes but the app', () => {
    const wrong = [...graph].filter(
      ([file, targets]) =>
        !/^server\/(app\.ts|routes\/)/.test(file) &&
        targets.some((target) => target.startsWith('server/routes/')),
    )
    expect(wrong.map(([file]) => file)).toEqual([])
  })

  test('app uses screens, screens use features, features use ui; features never meet', () => {
    const rank = (file: string) =>
      ['src/lib/', 'src/ui/', 'src/features/', 'src/screens/', 'src/app/'].findIndex((folder) =>
        file.startsWith(folder),
      )
    const feature = (file: string) => /^src\/features\/([^/]+)\//.exec(file)?.[1]
    const wrong = [...graph].flatMap(([file, targets]) =>
      targets
        .filter((target) => rank(file) >= 0 && rank(target) >= 0)
        .filter(
          (target) =>
            rank(target) > rank(file) ||
            (feature(file) && feature(target) && feature(file) !== feature(target)),
        )
        .map((target) => `${file} imports ${target}`),
    )
    expect(wrong).toEqual([])
  })

  test('commands that work offline load no client, whose schemas would slow their start (P3)', () => {
    const loads = (file: string) =>
      [...text(file).matchAll(/^import (?!type )[^'()]*'(\.[^']+)'/gm)].map(([, to = '']) =>
        normalize(join(dirname(file), to)),
      )
    const reached = new Set(
      ['codes', 'fit', 'verify', 'size', 'network', 'yield', 'simulate'].map(
        (name) => `cli/commands/${name}.ts`,
      ),
    )
    for (const file of reached) for (const target of loads(file)) reached.add(target)
    expect(reached).toContain('shared/solver/codes.ts')
    expect(reached).not.toContain('cli/client.ts')
  })

  test('there is no cycle', () => {
    const state = new Map<string, 'open' | 'done'>()
    const cycles: string[] = []
    const walk = (file: string, path: readonly string[]): void => {
      if (state.get(file) === 'done') return
      if (state.get(file) === 'open') {
        cycles.push([...path.slice(path.indexOf(file)), file].join(' > '))
        return
      }
      state.set(file, 'open')
      for (const target of graph.get(file) ?? []) if (graph.has(target)) walk(target, [...path, file])
      state.set(file, 'done')
    }
    for (const file of graph.keys()) walk(file, [])
    expect(cycles).toEqual([])
  })
})

describe('habits', () => {
  const hits = (files: readonly string[], pattern: RegExp) =>
    files.flatMap((file) =>
      text(file)
        .split('\n')
        .flatMap((line, i) => (pattern.test(line) ? [`${file}:${i + 1}: ${line.trim()}`] : [])),
    )

  test('no file is over 250 lines', () => {
    expect(product.filter((file) => text(file).split('\n').length > 251)).toEqual([])
  })

  test('no `any`, no silenced compiler, no focused or skipped test, nothing left for later', () => {
    const words = [
      'TO' + 'DO',
      'FIX' + 'ME',
      'X' + 'XX',
      '@ts-' + 'ignore',
      '@ts-' + 'expect-error',
      'as ' + 'any\\b',
    ]
    const pattern = new RegExp(
      `\\b(${words.slice(0, 3).join('|')})\\b|${words.slice(3).join('|')}|: any\\b|\\.(only|skip)\\(`,
    )
    const found = hits(
      code.filter((file) => file !== 'tests/source.test.ts'),
      pattern,
    )
    expect(found).toEqual([])
  })

  test('the solver uses only operations that every engine rounds alike', () => {
    const files = product.filter((file) => file.startsWith('shared/solver/'))
    const loose =
      /Math\.(pow|log|log2|log10|log1p|exp|expm1|sin|cos|tan|hypot|cbrt|sinh|cosh|tanh|random|fround|atan|atan2)\b|[^/*]\*\*[^/*]|Date\.now|new Date\(/
    const codeOnly = (line: string) =>
      !/^\s*(\*|\/\/|\/\*)/.test(line) && loose.test(line.replaceAll(/'[^']*'/g, "''"))
    expect(hits(files, loose).filter((hit) => codeOnly(hit.replace(/^[^:]+:\d+: /, '')))).toEqual([])
  })

  test('shared code keeps no clock, no randomness and no I/O', () => {
    const files = product.filter((file) => file.startsWith('shared/'))
    expect(
      hits(
        files,
        /Date\.now\(|Math\.random|from 'node:|\bprocess\.(env|argv|exit|stdout|stderr|cwd)|localStorage/,
      ),
    ).toEqual([])
  })

  test('ASVS V1.2.3, V1.3.2, V3.2.2: no code from text, no markup from text', () => {
    const pattern =
      /\beval\(|new Function\(|dangerouslySetInnerHTML|\.innerHTML\b|insertAdjacentHTML|document\.write/
    expect(hits(product, pattern)).toEqual([])
  })

  test('ASVS V1.2.4: SQL is never put together from values', () => {
    // A template in a query may name tables and columns of our own (upper-case constants), never a value.
    const files = product.filter(
      (file) =>
        file.startsWith('server/') && !file.startsWith('server/setup/') && !file.startsWith('server/db/'),
    )
    expect(hits(files, /query\(\s*`[^`]*\$\{(?![A-Z_]+\})/)).toEqual([])
  })

  test('ASVS V1.2.9: no regular expression is made from what somebody typed', () => {
    // What SHOW GRANTS answers is a pattern by definition, and the database's own text.
    const outsideGrants = product.filter((file) => file !== 'server/db/grants.ts')
    expect(hits(outsideGrants, /new RegExp\((?!['`][^$]*['`])/)).toEqual([])
  })

  test('no schema of a page uses a method of zod that the web build cuts out (vite.config.ts)', () => {
    const files = product.filter((file) => /^(src|shared)\//.test(file) && /from 'zod'/.test(text(file)))
    const kinds =
      /string\(\)[^/]*\.(email|url|jwt|emoji|guid|uuid\w*|nanoid|x?k?s?uid2?|cuid2?|ulid|base64(url)?|ipv[46]|cidrv[46]|e164|datetime|date|time|duration)\(/
    const wrappers = /\)\.(exactOptional|nonoptional|and|prefault|readonly|slugify|normalize|spa)\(/
    expect([...hits(files, kinds), ...hits(files, wrappers)]).toEqual([])
  })

  test('no path of a machine and no registry host is committed', () => {
    const pattern = new RegExp(['/wo' + 'rk/', 'registry' + '\\.npm', 'deb' + '\\.debian'].join('|'))
    const files = tracked.filter((file) => !/\.(png|woff2?|ico)$/.test(file))
    expect(hits(files, pattern)).toEqual([])
  })

  test('the top level holds what the folder map says and what tools demand', () => {
    const allowed =
      /^(README\.md|DEVELOPERS\.md|package(-lock)?\.json|vite\.config\.ts|vitest\.config\.ts|tsconfig\.json|index\.html|biome\.json|src|server|cli|shared|tests|public|\.ci|\.gitignore|\.gitattributes|\.npmrc|\.nvmrc)$/
    expect(
      [...new Set(tracked.map((file) => file.split('/')[0] ?? ''))].filter((name) => !allowed.test(name)),
    ).toEqual([])
  })
})
