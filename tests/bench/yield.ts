import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { SimpleLinearRegression } from 'ml-regression-simple-linear'
import { designDocument } from '../../shared/contract/design.ts'
import { draw, either, normal } from '../../shared/solver/random/draw.ts'
import { type Random, randomStreams } from '../../shared/solver/random/generator.ts'
import type { SizingDesign } from '../../shared/solver/sizing/types.ts'
import { type YieldPlan, yieldPlan } from '../../shared/solver/yield/plan.ts'
import { startYield } from '../../shared/solver/yield/simulate.ts'
import { type BenchRow, median } from './row.ts'

/**
 * P2: one simulated unit (draw, fit, codes, judge) against drawing the same numbers and one regression of the plan's
 * points. Blocks of both alternate, and the middle of their ratios counts, so that a busy moment hits both alike.
 */
const UNITS = 20_000
const ROUNDS = 15

export async function benchYield(): Promise<BenchRow[]> {
  const example = readFileSync(
    join(import.meta.dirname, '../vectors/examples/unipolar-18.design.json'),
    'utf8',
  )
  const design = designDocument.parse(JSON.parse(example))
  // The plan of the contract's example: without readings that scatter nothing would be drawn for the measurement.
  const measurement = {
    ...design.measurement,
    readings: 4,
    noiseV: 1.5e-6,
    instrument: { gainPpm: 3, offsetV: 2e-6 },
  }
  return [rowOf('one simulated unit, four readings a point', { ...design, measurement })]
}

function rowOf(name: string, design: SizingDesign): BenchRow {
  const plan = yieldPlan(design)
  const ours: number[] = []
  const peers: number[] = []
  for (let round = 0; round <= ROUNDS; round++) {
    const run = startYield(design, { trials: UNITS, seed: 1, passes: 1 })
    const a = timed(() => run.step(UNITS))
    const b = timed(() => drawAndRegress(plan))
    // The first round compiles.
    if (round === 0) continue
    ours.push(a)
    peers.push(b)
  }
  const ratio = median(ours.map((time, i) => time / peers[i]!))
  return {
    id: 'P2',
    name,
    ours: `${median(ours).toFixed(2)} us`,
    peer: `${median(peers).toFixed(2)} us`,
    ratio,
    goal: '<= 2.00',
    met: ratio <= 2,
  }
}

/** Microseconds a unit. */
function timed(work: () => unknown): number {
  const start = performance.now()
  work()
  return ((performance.now() - start) * 1000) / UNITS
}

/** The numbers of the same units in the same order, and a regression of the readings' means. */
function drawAndRegress(plan: YieldPlan): number {
  const { random, restart } = randomStreams()
  const errors = new Array<number>(plan.z.length).fill(0)
  let sum = 0
  for (let unit = 0; unit < UNITS; unit++) {
    restart(1, unit)
    sum += unitNumbers(plan, random)
    for (let i = 0; i < errors.length; i++) errors[i] = pointNumbers(plan, random)
    sum += new SimpleLinearRegression(plan.z as number[], errors).slope
  }
  return sum
}

function unitNumbers(plan: YieldPlan, random: Random): number {
  const { gain, offset } = plan.trim.trimmers
  let sum = 0
  for (const line of plan.gainLines) sum += draw(random, line, line.limitPpm)
  for (const line of plan.offsetLines) sum += draw(random, line, line.limitV)
  if (gain !== null && gain.tolerance > 0) sum += either(random)
  if (offset !== null && offset.tolerance > 0) sum += either(random)
  if (plan.instrumentGain > 0) sum += either(random)
  if (plan.instrumentOffset > 0) sum += either(random)
  if (plan.inlV > 0) for (let i = 0; i < plan.judgedX.length; i++) sum += either(random)
  return sum
}

function pointNumbers({ readings, noiseV }: YieldPlan, random: Random): number {
  let sum = 0
  if (noiseV > 0) for (let k = 0; k < readings; k++) sum += noiseV * normal(random)
  return sum / readings
}
