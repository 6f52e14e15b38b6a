import { draw, either } from '../random/draw.ts'
import type { Random } from '../random/generator.ts'
import type { Unit } from './measure.ts'
import type { YieldPlan } from './plan.ts'

/** A unit to fill again and again. */
export function emptyUnit(plan: YieldPlan): Unit {
  return {
    offset: 0,
    gain: 0,
    linearity: new Float64Array(plan.judgedX.length),
    gainFactor: 1,
    offsetFactor: 1,
    meterGain: 0,
    meterOffset: 0,
    noiseOffset: 0,
    noiseGain: 0,
  }
}

/**
 * Draws a unit: the budget's lines in their order, the adjusters' true effects within ±τ, the meter within its limits, the
 * linearity at each judged code. Initial and drift lines make the unit as found (a later re-trim meets the drift too);
 * noise lines, that no trim removes, stand in the error that is judged.
 * Source: solver.md section 9.
 */
export function drawUnit(plan: YieldPlan, unit: Unit, random: Random): void {
  const { trimmers, channel } = plan.trim
  unit.offset = 0
  unit.gain = 0
  unit.noiseOffset = 0
  unit.noiseGain = 0
  for (const line of plan.gainLines) {
    const slope = ((line.nominalPpm ?? 0) + draw(random, line, line.limitPpm)) / 1e6
    // About its pivot: at the offset point the output moves too.
    const offset = slope * (channel.range.x0 - (line.pivotV ?? 0))
    if (line.when === 'noise') {
      unit.noiseGain += slope
      unit.noiseOffset += offset
    } else {
      unit.gain += slope
      unit.offset += offset
    }
  }
  for (const line of plan.offsetLines) {
    const value = (line.nominalV ?? 0) + draw(random, line, line.limitV)
    if (line.when === 'noise') unit.noiseOffset += value
    else unit.offset += value
  }
  unit.gainFactor = trimmers.gain === null ? 1 : factorOf(trimmers.gain.tolerance, random)
  unit.offsetFactor = trimmers.offset === null ? 1 : factorOf(trimmers.offset.tolerance, random)
  unit.meterGain = plan.instrumentGain === 0 ? 0 : plan.instrumentGain * either(random)
  unit.meterOffset = plan.instrumentOffset === 0 ? 0 : plan.instrumentOffset * either(random)
  if (plan.inlV === 0) return
  for (let i = 0; i < unit.linearity.length; i++) unit.linearity[i] = plan.inlV * either(random)
}

function factorOf(tolerance: number, random: Random): number {
  return tolerance === 0 ? 1 : 1 + tolerance * either(random)
}
