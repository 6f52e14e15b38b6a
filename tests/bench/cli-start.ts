import { spawnSync } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildCli } from '../../server/setup/build-cli.mjs'
import { type BenchRow, median } from './row.ts'

const root = join(import.meta.dirname, '../..')
const rounds = 15

/** P3: whole processes, medians of 15 interleaved runs, so that a busy moment of the machine hits all alike. */
export async function benchCliStart(): Promise<BenchRow[]> {
  const folder = mkdtempSync(join(tmpdir(), 'ogee-bench-'))
  try {
    await buildCli(root, folder)
    const ogee = join(folder, 'ogee.mjs')
    const example = (part: string) => join(root, `tests/vectors/examples/unipolar-18.${part}`)
    const codes = ['codes', '--design', example('design.json'), '--points', example('points.csv')]
    const [peer, version, first] = interleaved([
      ['-e', '0'],
      [ogee, '--version'],
      [ogee, ...codes],
    ])
    return [row('ogee --version', version, peer, 1.5), row('ogee codes of unipolar-18', first, peer, 2)]
  } finally {
    rmSync(folder, { recursive: true, force: true })
  }
}

function interleaved(commands: readonly (readonly string[])[]): number[] {
  const times = commands.map(() => [] as number[])
  // The first round fills the caches of the file system and is not counted.
  for (let round = 0; round <= rounds; round += 1) {
    commands.forEach((args, i) => {
      const ms = timed(args)
      if (round > 0) times[i]?.push(ms)
    })
  }
  return times.map(median)
}

function timed(args: readonly string[]): number {
  const start = performance.now()
  const { status, stderr } = spawnSync(process.execPath, args, { stdio: ['ignore', 'ignore', 'pipe'] })
  const ms = performance.now() - start
  if (status !== 0) throw new Error(`node ${args.join(' ')} ended with ${status}: ${stderr}`)
  return ms
}

function row(name: string, ours = Number.NaN, peer = Number.NaN, goal: number): BenchRow {
  const ratio = ours / peer
  return {
    id: 'P3',
    name,
    ours: `${ours.toFixed(1)} ms`,
    peer: `${peer.toFixed(1)} ms`,
    ratio,
    goal: `at most ${goal}`,
    met: ratio <= goal,
  }
}
