import { type Channel, prepareChannel } from './channel.ts'
import type { ConverterRange } from './converter.ts'
import { fitBest } from './fit-best.ts'
import { fitMinimax } from './fit-minimax.ts'
import { fitTerminal } from './fit-terminal.ts'
import { flagsOf } from './flags.ts'
import { expand, type InstrumentU, instrumentU, lineUncertainty } from './instrument.ts'
import { leastSquares } from './least-squares.ts'
import { type Line, residualsOf } from './line.ts'
import { type PointSet, takePoints } from './points.ts'
import type { Design, FitDocument, FitResult, InstrumentLimits, MeasuredPoint, Method } from './types.ts'
import { SOLVER_VERSION } from './version.ts'

export type FitOptions = {
  rangeId?: string | undefined
  /** Left out: the design's. */
  method?: Method | undefined
  /** Left out: the design's; null: none. */
  instrument?: InstrumentLimits | null | undefined
}

/** A fit with the numbers that codes need, next to its result. */
export type Fitted = { line: Line; instr: InstrumentU; result: FitResult }

/**
 * The error line of one measurement: offset and gain error with their uncertainty, residuals, flags.
 * @param design `ogee.design/1`, checked
 * @param points 2 to 4096 points at two or more codes; volts
 * @param options range, method, instrument; each defaults to the design's
 * @returns `ogee.fit/1`: offset in V, gain in ppm (a slope), standard and expanded (95 %) uncertainty, all finite
 * @throws as `prepareChannel` and `takePoints`: range-required, too-few-codes, implausible-point and others, with places
 * Source: solver.md sections 1 to 3; JCGM 100:2008.
 * @example fitPoints(unipolar18, points).fit.gainErrorPpm // -203.4...
 */
export function fitPoints(
  design: Design,
  points: readonly MeasuredPoint[],
  options: FitOptions = {},
): FitDocument {
  const channel = prepareChannel(design, options.rangeId)
  const { result } = fitChannel(channel, points, options)
  return { format: 'ogee.fit/1', solver: SOLVER_VERSION, range: channel.range.id, fit: result }
}

/** As `fitPoints`, on a prepared channel. */
export function fitChannel(
  channel: Channel,
  points: readonly MeasuredPoint[],
  options: FitOptions = {},
): Fitted {
  return fitSet(channel, takePoints(points, channel.range, channel.rules), options)
}

/** As `fitPoints`, on points that were taken already; needs two distinct codes. */
export function fitSet(channel: Channel, set: PointSet, options: FitOptions): Fitted {
  const method = options.method ?? channel.method
  const instrument = options.instrument === undefined ? channel.instrument : options.instrument
  const instr = instrumentU(instrument)
  const ls = leastSquares(set.z, set.e, set.u)
  const line =
    method === 'best-fit'
      ? fitBest(set, channel.noise, ls)
      : method === 'minimax'
        ? fitMinimax(set)
        : fitTerminal(set, channel.noise)
  const { range } = channel
  const { standardUncertainty, expandedUncertainty } = uncertainties(line, instr, range.x0)
  const { residuals, linearity } = residualPart(set, line, range)
  const result: FitResult = {
    method,
    n: set.n,
    dof: line.dof > 0 && line.dof !== Number.POSITIVE_INFINITY ? line.dof : null,
    dofWhy: line.dofWhy,
    offsetErrorV: line.offset,
    gainErrorPpm: line.gain * 1e6,
    fullScaleErrorV: line.offset + line.gain * range.zFull,
    standardUncertainty,
    expandedUncertainty,
    residuals,
    linearity,
    chiSquared: line.chiSquared,
    instrument: instrument
      ? { id: instrument.id ?? null, gainPpm: instrument.gainPpm, offsetV: instrument.offsetV }
      : null,
    flags: flagsOf(set, ls, range, channel.settleLimitLsb),
    notes: line.note === null ? set.notes : [...set.notes, line.note],
  }
  return { line, instr, result }
}

function uncertainties(
  line: Line,
  instr: InstrumentU,
  x0: number,
): Pick<FitResult, 'standardUncertainty' | 'expandedUncertainty'> {
  if (line.variance === null) return { standardUncertainty: null, expandedUncertainty: null }
  const { offset, gain, cov } = lineUncertainty(line.variance, instr, x0)
  const bigOffset = expand(offset, line.dof)
  const bigGain = expand(gain, line.dof)
  return {
    standardUncertainty: { offsetV: offset.u, gainPpm: gain.u * 1e6, covarianceVPpm: cov * 1e6 },
    expandedUncertainty: {
      offsetV: bigOffset.expanded,
      gainPpm: bigGain.expanded * 1e6,
      kOffset: bigOffset.k,
      kGain: bigGain.k,
    },
  }
}

function residualPart(
  set: PointSet,
  line: Line,
  range: ConverterRange,
): Pick<FitResult, 'residuals' | 'linearity'> {
  const r = residualsOf(line, set.z, set.e)
  const residuals = new Array<FitResult['residuals'][number]>(set.n)
  let maxV = 0
  for (let i = 0; i < set.n; i++) {
    const residualV = r[i]!
    const size = Math.abs(residualV)
    if (size > maxV) maxV = size
    residuals[i] = {
      code: set.codes[i]!,
      idealV: set.x[i]!,
      measuredV: set.y[i]!,
      errorV: set.e[i]!,
      residualV,
      residualLsb: residualV / range.lsbV,
    }
  }
  let at = 0
  // "Within 1e-9 of the largest": equal but for rounding, so the lowest code is named whatever the rounding was.
  while (Math.abs(r[at]!) < maxV * (1 - 1e-9)) at += 1
  return {
    residuals,
    linearity: {
      maxV,
      maxLsb: maxV / range.lsbV,
      maxPpm: (maxV / range.fsrV) * 1e6,
      atCode: set.codes[at]!,
    },
  }
}
