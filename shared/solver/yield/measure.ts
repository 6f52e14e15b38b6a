import type { PointSet } from '../points.ts'
import { mean } from '../points.ts'
import { normal } from '../random/draw.ts'
import type { Random } from '../random/generator.ts'
import { pooledReadings } from '../readings.ts'
import type { YieldPlan } from './plan.ts'

/** True state of a simulated unit: its error line as found, its linearity, how the adjusters and the meter really work. */
export type Unit = {
  offset: number
  gain: number
  /** Error of linearity at each judged code, V. */
  linearity: Float64Array
  /** True effect over the design's, per adjuster. */
  gainFactor: number
  offsetFactor: number
  meterGain: number
  meterOffset: number
  /** Output noise at the moment of judging. */
  noiseOffset: number
  noiseGain: number
}

/** A point set to fill again and again: nothing is made anew in the loop. */
export function emptyPoints(plan: YieldPlan): PointSet {
  const n = plan.codes.length
  const zeros = (): number[] => new Array<number>(n).fill(0)
  const many = plan.readings > 1
  return {
    n,
    codes: [...plan.codes],
    x: [...plan.x],
    y: zeros(),
    e: zeros(),
    z: [...plan.z],
    u: null,
    stated: zeros(),
    uDof: Number.POSITIVE_INFINITY,
    source: 'none',
    readings: plan.codes.map(() => (many ? new Array<number>(plan.readings).fill(0) : null)),
    distinct: plan.distinct,
    notes: [],
  }
}

/**
 * What the meter shows of a unit at the plan's codes, with the line moved by the loaded codes; the same point set as
 * `takePoints` would make of these readings.
 * @param offset true offset error at the offset point now, V; @param gain true slope error now
 */
export function measureUnit(
  plan: YieldPlan,
  set: PointSet,
  unit: Unit,
  offset: number,
  gain: number,
  random: Random,
): void {
  const { x, z, judgedOf, readings } = plan
  for (let i = 0; i < set.n; i++) {
    const output = x[i]! + (offset + gain * z[i]! + unit.linearity[judgedOf[i]!]!)
    const shown = output + (unit.meterGain * output + unit.meterOffset)
    if (readings === 1) {
      set.y[i] = oneReading(plan, shown, random)
    } else {
      const list = set.readings[i] as number[]
      for (let k = 0; k < readings; k++) list[k] = oneReading(plan, shown, random)
      set.y[i] = mean(list)
    }
  }
  if (plan.distinct < set.n) sortReplicates(set)
  for (let i = 0; i < set.n; i++) set.e[i] = set.y[i]! - x[i]!
  if (readings > 1) settle(plan, set)
}

function oneReading({ noiseV, resolutionV }: YieldPlan, shown: number, random: Random): number {
  const value = noiseV === 0 ? shown : shown + noiseV * normal(random)
  return resolutionV === 0 ? value : Math.round(value / resolutionV) * resolutionV
}

/** Points of one code stand in order of y, as the fit takes them. */
function sortReplicates({ n, codes, y, readings }: PointSet): void {
  for (let i = 1; i < n; i++) {
    for (let j = i; j > 0 && codes[j] === codes[j - 1] && y[j]! < y[j - 1]!; j--) {
      const value = y[j]!
      y[j] = y[j - 1]!
      y[j - 1] = value
      const list = readings[j]!
      readings[j] = readings[j - 1]!
      readings[j - 1] = list
    }
  }
}

/** u of each point from all readings, as solver.md section 2 says; none when the readings do not differ at all. */
function settle({ readings, resolutionV }: YieldPlan, set: PointSet): void {
  const pooled = pooledReadings(set.readings)
  if (!(pooled.variance > 0) && resolutionV === 0) {
    set.u = null
    set.source = 'none'
    set.uDof = Number.POSITIVE_INFINITY
    return
  }
  const u = Math.sqrt(pooled.variance / readings + (resolutionV * resolutionV) / 12)
  set.u = set.u ?? new Array<number>(set.n).fill(0)
  for (let i = 0; i < set.n; i++) set.u[i] = u
  set.source = 'readings'
  set.uDof = pooled.dof
}
