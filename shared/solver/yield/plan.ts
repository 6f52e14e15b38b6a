import { OgeeError } from '../../errors.ts'
import { idealV, limitInVolts } from '../converter.ts'
import { prepareTrim, type TrimChannel } from '../prepare-trim.ts'
import { budgetTerms } from '../sizing/budget.ts'
import type { GainLine, OffsetLine, SizingDesign } from '../sizing/types.ts'

/** What one simulated unit needs, worked out once. Volts, ratios. */
export type YieldPlan = {
  trim: TrimChannel
  gainLines: readonly GainLine[]
  offsetLines: readonly OffsetLine[]
  toleranceV: number
  /** Readings of a point, at least 1; standard deviation of one; the meter's step, 0 for none. */
  readings: number
  noiseV: number
  resolutionV: number
  instrumentGain: number
  instrumentOffset: number
  inlV: number
  /** The plan's codes, rising, with their ideal outputs. */
  codes: readonly number[]
  x: readonly number[]
  z: readonly number[]
  /** Codes judged: the plan's and both ends, rising, each once. `judgedOf[i]` is the place of plan code i. */
  judgedX: readonly number[]
  judgedZ: readonly number[]
  judgedOf: readonly number[]
  /** Distinct codes of the plan. */
  distinct: number
}

/**
 * Checks a design for simulation.
 * @throws tolerance-missing, too-few-codes, code-out-of-range, budget-line, and as `prepareTrim`
 */
export function yieldPlan(design: SizingDesign, rangeId?: string): YieldPlan {
  const trim = prepareTrim(design, rangeId)
  const { channel } = trim
  const { range } = channel
  budgetTerms(design)
  const { decision, measurement } = design
  if (decision === undefined) {
    const message =
      'The design has no decision part, so there is no tolerance to judge units by. Add decision.'
    throw new OgeeError('tolerance-missing', message, { errors: [{ path: '/decision', message }] })
  }
  const codes = [...(measurement.points ?? [])].sort((a, b) => a - b)
  checkCodes(codes, range.count)
  const judged = [...new Set([0, ...codes, range.count - 1])].sort((a, b) => a - b)
  const outputs = codes.map((code) => idealV(range, code))
  const judgedX = judged.map((code) => idealV(range, code))
  return {
    trim,
    gainLines: design.budget?.gain ?? [],
    offsetLines: design.budget?.offset ?? [],
    toleranceV: limitInVolts(decision.tolerance, range),
    readings: channel.noise.readings,
    noiseV: channel.noise.noiseV ?? 0,
    resolutionV: channel.rules.resolutionV,
    instrumentGain: (channel.instrument?.gainPpm ?? 0) / 1e6,
    instrumentOffset: channel.instrument?.offsetV ?? 0,
    inlV: range.inlLsb * range.lsbV,
    codes,
    x: outputs,
    z: outputs.map((x) => x - range.x0),
    judgedX,
    judgedZ: judgedX.map((x) => x - range.x0),
    judgedOf: codes.map((code) => judged.indexOf(code)),
    distinct: new Set(codes).size,
  }
}

function checkCodes(codes: readonly number[], count: number): void {
  const refuse = (code: 'too-few-codes' | 'code-out-of-range', message: string): never => {
    throw new OgeeError(code, message, { errors: [{ path: '/measurement/points', message }] })
  }
  if (new Set(codes).size < 2) {
    refuse(
      'too-few-codes',
      'The plan of measurement has fewer than two different codes: no line can be fitted.',
    )
  }
  const wrong = codes.find((code) => !Number.isInteger(code) || code < 0 || code >= count)
  if (wrong !== undefined) {
    refuse('code-out-of-range', `Code ${wrong} of the plan does not exist: the highest is ${count - 1}.`)
  }
}
