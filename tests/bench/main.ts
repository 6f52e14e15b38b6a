import type { BenchRow } from './row.ts'

/** `npm run bench [name …]`: ours, peer, ratio, goal, measured in one run on this machine. */

const benches: Record<string, () => Promise<readonly BenchRow[]>> = {
  solver: async () => (await import('./solver.ts')).benchSolver(),
  yield: async () => (await import('./yield.ts')).benchYield(),
  cli: async () => (await import('./cli-start.ts')).benchCliStart(),
  recording: async () => (await import('./recording.ts')).benchRecording(),
  history: async () => (await import('./history.ts')).benchHistory(),
  batches: async () => (await import('./batches.ts')).benchBatches(),
  ledger: async () => (await import('./ledger.ts')).benchLedger(),
  memory: async () => (await import('./memory.ts')).benchMemory(),
  keystroke: async () => (await import('./keystroke.ts')).benchKeystroke(),
  'lot-scroll': async () => (await import('./lot-scroll.ts')).benchLotScroll(),
  'first-load': async () => (await import('./first-load.ts')).benchFirstLoad(),
}

const asked = process.argv.slice(2)
const unknown = asked.filter((name) => !(name in benches))
if (unknown.length > 0) {
  process.stderr.write(`No bench ${unknown.join(', ')}. There are: ${Object.keys(benches).join(', ')}.\n`)
  process.exitCode = 64
} else {
  for (const name of asked.length > 0 ? asked : Object.keys(benches)) {
    for (const row of (await benches[name]?.()) ?? []) print(row)
  }
}

function print({ id, name, ours, peer, ratio, goal, met }: BenchRow): void {
  const cells = [
    id.padEnd(4),
    name.padEnd(44),
    ours.padStart(16),
    peer.padStart(16),
    ratio.toFixed(2).padStart(8),
    goal.padEnd(12),
    met ? 'met' : 'NOT MET',
  ]
  process.stdout.write(`${cells.join('  ')}\n`)
}
