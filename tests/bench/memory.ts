import { spawn } from 'node:child_process'
import { once } from 'node:events'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildCli } from '../../server/setup/build-cli.mjs'
import { startMariadb } from '../../server/setup/mariadb.mjs'
import { delivery } from '../faults/recording-client.ts'
import { seededRandom } from '../support/random.ts'
import { startServer } from '../support/server-process.ts'
import type { BenchRow } from './row.ts'

/**
 * P8: the most memory that the server, and the command, held over a long batch and over a short one. `OGEE_BENCH_ROWS` sets
 * the length of the long one. Linux only: the peak is what the kernel counted.
 */

const longRows = Number(process.env.OGEE_BENCH_ROWS ?? 1_000_000)
const shortRows = 10_000
const rowsAUnit = 5

type Peaks = { server: number; command: number }

export async function benchMemory(): Promise<readonly BenchRow[]> {
  const dir = mkdtempSync(join(tmpdir(), 'ogee-bench-'))
  await buildCli(join(import.meta.dirname, '../..'), join(dir, 'cli'))
  const database = await startMariadb({ dir, size: 'start' })
  const server = await startServer({
    databaseUrl: database.url,
    adminUrl: database.adminUrl,
    env: { OGEE_LOG: 'warn' },
  })
  const env = {
    PATH: process.env.PATH ?? '',
    HOME: dir,
    OGEE_URL: server.url,
    OGEE_TOKEN: server.accounts().token,
  }
  const random = seededRandom(1)
  let index = 0
  const peaksOver = async (rows: number): Promise<Peaks> => {
    resetPeak(server.pid())
    const args = [join(dir, 'cli/ogee.mjs'), 'batch', '-', '--design', 'DBS-A', '--applied', 'neutral']
    const child = spawn(process.execPath, [...args, '--format', 'csv'], {
      env,
      stdio: ['pipe', 'ignore', 'inherit'],
    })
    const exit = once(child, 'exit')
    child.stdin.write('unit,channel,code,measured\n')
    for (let done = 0; done < rows; done += rowsAUnit) {
      const { unit, body } = delivery(index++, random)
      const { points } = JSON.parse(body) as { points: { code: number; measured: number }[] }
      const text = points.map(({ code, measured }) => `${unit},1,${code},${measured}\n`).join('')
      if (!child.stdin.write(text)) await once(child.stdin, 'drain')
    }
    // The command's own peak is read while it is still there: it waits for the end of its input.
    await quiet(child.pid ?? 0)
    const command = peakOf(child.pid ?? 0)
    child.stdin.end()
    const [code] = (await exit) as [number]
    if (code !== 0) throw new Error(`ogee batch ended with ${code}`)
    return { server: peakOf(server.pid()), command }
  }
  try {
    // A server that has just started has not yet taken what it works with.
    for (let round = 0; round < 3; round += 1) await peaksOver(shortRows)
    const short = await peaksOver(shortRows)
    return rows(await peaksOver(longRows), short)
  } finally {
    await server.remove()
    await database.stop()
    rmSync(dir, { recursive: true, force: true })
  }
}

const resetPeak = (pid: number) => writeFileSync(`/proc/${pid}/clear_refs`, '5')

/** Kilobytes. */
function peakOf(pid: number): number {
  return Number(/VmHWM:\s*(\d+)/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1])
}

/** Waits until a process has stopped working: its answers have come. */
async function quiet(pid: number): Promise<void> {
  const ticks = () => readFileSync(`/proc/${pid}/stat`, 'utf8').split(' ').slice(13, 15).join(' ')
  for (let before = ''; before !== ticks(); ) {
    before = ticks()
    await new Promise((resolve) => setTimeout(resolve, 1_000))
  }
}

function rows(long: Peaks, short: Peaks): BenchRow[] {
  const row = (name: string, ours: number, peer: number, most: number): BenchRow => ({
    id: 'P8',
    name,
    ours: `${(ours / 1024).toFixed(0)} MB`,
    peer: `${(peer / 1024).toFixed(0)} MB`,
    ratio: ours / peer,
    goal: `<= ${most.toFixed(2)}`,
    met: ours / peer <= most,
  })
  const sizes = `${longRows / 1_000}k rows, ${shortRows / 1_000}k`
  return [
    row(`server memory, ${sizes}`, long.server, short.server, 1.2),
    // Finding a unit that stands twice takes 32 bytes for each.
    row(`ogee batch memory, ${sizes}`, long.command, short.command, 1.5),
  ]
}
