import { OgeeError } from '../../errors.ts'
import { NORMAL_METHOD } from '../random/draw.ts'
import { GENERATOR, randomStreams } from '../random/generator.ts'
import type { SizingDesign } from '../sizing/types.ts'
import { SOLVER_VERSION } from '../version.ts'
import { emptyUnit } from './draw-unit.ts'
import { emptyPoints } from './measure.ts'
import { yieldPlan } from './plan.ts'
import { type Bench, runUnit } from './run-unit.ts'
import { codeSpreads, emptyTally, passYields, remainingOf } from './tally.ts'
import type { YieldResult } from './types.ts'

export type YieldOptions = {
  /** Units to simulate, 1 to 10 000 000; 100 000 when left out. */
  trials?: number | undefined
  /** Whole number, 0 to 2^53 - 1; 1 when left out. */
  seed?: number | undefined
  /** Trims of each unit, 1 to 9; 2 when left out. */
  passes?: number | undefined
  rangeId?: string | undefined
  /** From pass 2 on: the design's effects, or those learned from the move of the pass before. */
  effects?: 'design' | 'learned' | undefined
}

export type YieldProgress = {
  /** Called after each block of units. */
  onProgress?: ((done: number, trials: number) => void) | undefined
  /** Asked after each block; true ends the simulation with what is there. */
  shouldStop?: (() => boolean) | undefined
}

/** A simulation that is run block by block, so that a worker or a terminal stays answering. */
export type YieldRun = {
  readonly trials: number
  readonly done: number
  /** Simulates up to so many more units; true when all are done. */
  step(units: number): boolean
  /** The result for the units done so far, at least one. */
  result(): YieldResult
}

export const YIELD_TRIALS_MAX = 10_000_000
const PASSES_MAX = 9
const BLOCK = 2_000

/**
 * Starts a simulation. The blocks it is run in change no number: each unit has its own random stream.
 * @throws invalid-request for trials, seed or passes out of bounds; tolerance-missing, and as `prepareTrim`
 * Source: solver.md section 9.
 * @example startYield(unipolar18, { trials: 1000 }).step(1000) // true
 */
export function startYield(design: SizingDesign, options: YieldOptions = {}): YieldRun {
  const trials = whole('trials', options.trials ?? 100_000, 1, YIELD_TRIALS_MAX)
  const seed = whole('seed', options.seed ?? 1, 0, Number.MAX_SAFE_INTEGER)
  const passes = whole('passes', options.passes ?? 2, 1, PASSES_MAX)
  const effects = options.effects ?? 'design'
  const plan = yieldPlan(design, options.rangeId)
  const tally = emptyTally(plan, trials, passes, effects === 'learned')
  const bench: Bench = { unit: emptyUnit(plan), set: emptyPoints(plan), streams: randomStreams() }
  const { range } = plan.trim.channel
  let done = 0
  return {
    trials,
    get done() {
      return done
    },
    step(units) {
      const end = Math.min(trials, done + units)
      for (; done < end; done++) runUnit(plan, bench, tally, seed, done)
      return done >= trials
    },
    result() {
      return {
        format: 'ogee.yield/1',
        solver: SOLVER_VERSION,
        range: range.id,
        seed,
        trials: done,
        stopped: done < trials,
        effects,
        toleranceV: plan.toleranceV,
        toleranceLsb: plan.toleranceV / range.lsbV,
        passes: passYields(tally, Math.max(done, 1)),
        remainingLsb: remainingOf(tally),
        codes: codeSpreads(tally),
        generator: GENERATOR,
        normalMethod: NORMAL_METHOD,
      }
    },
  }
}

/**
 * Yield of a design by simulation: each unit is drawn from the budget, measured by the plan, trimmed for up to `passes`
 * passes, and its true remaining error judged against the decision's tolerance.
 * @param options trials, seed, passes, range, effects; progress and stop are asked between blocks
 * @returns `ogee.yield/1`; `trials` is less than asked for when stopped. The same design, seed and options give the same
 *   numbers, bit for bit
 * @throws as `startYield`; interrupted when stopped before the first unit
 * Source: solver.md section 9.
 * @example simulateYield(unipolar18, { trials: 1000, seed: 1 }).passes.length // 2
 */
export function simulateYield(design: SizingDesign, options: YieldOptions & YieldProgress = {}): YieldResult {
  const run = startYield(design, options)
  for (;;) {
    if (options.shouldStop?.() === true) break
    const finished = run.step(BLOCK)
    options.onProgress?.(run.done, run.trials)
    if (finished) break
  }
  if (run.done === 0) throw new OgeeError('interrupted', 'Stopped before the first unit was simulated.')
  return run.result()
}

function whole(name: string, value: number, least: number, most: number): number {
  if (Number.isSafeInteger(value) && value >= least && value <= most) return value
  const message = `${name} is ${value}; it must be a whole number from ${least} to ${most}.`
  throw new OgeeError('invalid-request', message, { errors: [{ path: `/${name}`, message }] })
}
