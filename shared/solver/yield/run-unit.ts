import { nodeV } from '../network.ts'
import type { PointSet } from '../points.ts'
import type { Random, Streams } from '../random/generator.ts'
import { drawUnit } from './draw-unit.ts'
import { measureUnit, type Unit } from './measure.ts'
import type { YieldPlan } from './plan.ts'
import type { Tally } from './tally.ts'
import { countPass, finishUnit } from './tally.ts'
import { type Memory, type Trimmed, trimUnit } from './trim-unit.ts'

/** Places that a unit is worked out in, filled again for each. */
export type Bench = { unit: Unit; set: PointSet; streams: Streams }

/**
 * One simulated unit: drawn, then measured and trimmed for as many passes, its true remaining error judged after each.
 * @param number of the unit, 0, 1, …: its random stream
 * Source: solver.md section 9.
 */
export function runUnit(plan: YieldPlan, bench: Bench, tally: Tally, seed: number, number: number): void {
  const { unit, set, streams } = bench
  streams.restart(seed, number)
  const { random } = streams
  drawUnit(plan, unit, random)
  const memory: Memory | null = tally.learns ? { previous: null } : null
  let loaded: Trimmed | null = null
  let errorV = 0
  for (let pass = 0; pass < tally.passes.length; pass++) {
    const codes: Trimmed | null = onePass(plan, unit, set, loaded, memory, random)
    // Out of reach stays so: no codes are loaded, and the same unit is out of reach again.
    if (codes === null) {
      for (let later = pass; later < tally.passes.length; later++) tally.passes[later]!.outOfReach += 1
      return
    }
    loaded = codes
    errorV = worstError(plan, unit, codes)
    countPass(tally, pass, codes.tooCoarse, errorV <= plan.toleranceV)
  }
  if (loaded !== null) finishUnit(tally, plan, loaded, errorV)
}

function onePass(
  plan: YieldPlan,
  unit: Unit,
  set: PointSet,
  loaded: Trimmed | null,
  memory: Memory | null,
  random: Random,
): Trimmed | null {
  const offset = unit.offset + moved(plan, unit, loaded, true)
  const gain = unit.gain + moved(plan, unit, loaded, false)
  measureUnit(plan, set, unit, offset, gain, random)
  return trimUnit(plan, set, loaded, memory)
}

/** What the loaded codes truly do to offset (α) or slope (β). */
function moved(plan: YieldPlan, unit: Unit, loaded: Trimmed | null, ofOffset: boolean): number {
  if (loaded === null) return 0
  const { gain, offset } = plan.trim.trimmers
  let sum = 0
  if (gain !== null && loaded.gain !== null) {
    sum += unit.gainFactor * (ofOffset ? gain.alpha : gain.beta) * (nodeV(gain, loaded.gain) - gain.nominalV)
  }
  if (offset !== null && loaded.offset !== null) {
    const v = nodeV(offset, loaded.offset) - offset.nominalV
    sum += unit.offsetFactor * (ofOffset ? offset.alpha : offset.beta) * v
  }
  return sum
}

/** The largest true |error| at the judged codes with these codes loaded, V. */
function worstError(plan: YieldPlan, unit: Unit, codes: Trimmed): number {
  const offset = unit.offset + unit.noiseOffset + moved(plan, unit, codes, true)
  const gain = unit.gain + unit.noiseGain + moved(plan, unit, codes, false)
  let worst = 0
  for (let i = 0; i < plan.judgedZ.length; i++) {
    const error = Math.abs(offset + gain * plan.judgedZ[i]! + unit.linearity[i]!)
    if (error > worst) worst = error
  }
  return worst
}
