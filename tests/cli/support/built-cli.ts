import { type ChildProcess, spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll } from 'vitest'
import { buildCli } from '../../../server/setup/build-cli.mjs'

const root = join(import.meta.dirname, '../../..')
export const examples = join(root, 'tests/vectors/examples')

export type Ran = { code: number | null; signal: NodeJS.Signals | null; stdout: string; stderr: string }
export type RunOptions = { input?: string | Buffer; env?: Record<string, string>; cwd?: string }

export type BuiltCli = {
  /** A folder of this test file, thrown away at its end. */
  folder: string
  path: string
  start: (args: readonly string[], options?: RunOptions) => ChildProcess
  run: (args: readonly string[], options?: RunOptions) => Promise<Ran>
}

/** Builds the command line into a folder outside the checkout, as users get it: no node_modules is near. */
export function builtCli(): BuiltCli {
  const folder = mkdtempSync(join(tmpdir(), 'ogee-cli-'))
  const path = join(folder, 'bin/ogee.mjs')
  beforeAll(async () => await buildCli(root, join(folder, 'bin')), 60_000)
  afterAll(() => rmSync(folder, { recursive: true, force: true }))

  const start = (args: readonly string[], { env = {}, cwd = folder }: RunOptions = {}) =>
    spawn(process.execPath, [path, ...args], { cwd, env: bareEnv(folder, env) })
  return {
    folder,
    path,
    start,
    run: async (args, options = {}) => await ended(start(args, options), options.input),
  }
}

/** What a process needs and nothing of whoever runs the tests: no token, no config file, no colour wish. */
function bareEnv(folder: string, env: Record<string, string>): Record<string, string> {
  return { PATH: process.env.PATH ?? '', HOME: folder, XDG_CONFIG_HOME: join(folder, 'config'), ...env }
}

export async function ended(child: ChildProcess, input: string | Buffer = ''): Promise<Ran> {
  const out: Buffer[] = []
  const err: Buffer[] = []
  child.stdout?.on('data', (piece: Buffer) => out.push(piece))
  child.stderr?.on('data', (piece: Buffer) => err.push(piece))
  child.stdin?.on('error', () => undefined)
  child.stdin?.end(input)
  return await new Promise((resolve, reject) => {
    child.on('error', reject)
    child.on('close', (code, signal) =>
      resolve({
        code,
        signal,
        stdout: Buffer.concat(out).toString('utf8'),
        stderr: Buffer.concat(err).toString('utf8'),
      }),
    )
  })
}

/** The last line of standard error, which is the problem document when programs are reading. */
export const problemOf = ({ stderr }: Ran): Record<string, unknown> =>
  JSON.parse(stderr.trimEnd().split('\n').at(-1) ?? '') as Record<string, unknown>
