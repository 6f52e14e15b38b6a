import { type ConverterRange, converterRange } from './converter.ts'
import { expand, instrumentU } from './instrument.ts'
import type { CodesResult, Design, FitDocument, FitResult } from './types.ts'

/** Where a plot needs it: errors in V and 95 % uncertainties at any output x, V, between the ends of the range. */
export type ErrorLine = {
  /** The fitted error line at x, V. */
  errorAt(x: number): number
  /** Standard uncertainty of the fitted line at x, instrument included, V; null without uncertainties. */
  standardUncertaintyAt(x: number): number | null
  /** Expanded uncertainty there, V; null without uncertainties. */
  errorUncertaintyAt(x: number): number | null
  /** The predicted error line after the codes at x, V; null without codes. */
  predictedErrorAt(x: number): number | null
}

/**
 * The lines of a stored or computed result as functions of the output voltage.
 * @param design the design that the result was computed with
 * @param result `ogee.fit/1` or `ogee.codes/1`
 * @throws as `converterRange`
 * Source: solver.md section 3, u²(e at x); the k is that of the line at x (JCGM 100:2008 G.4).
 * @example errorLine(unipolar18, result).errorAt(0) // result.fit.offsetErrorV
 */
export function errorLine(design: Design, result: FitDocument | CodesResult): ErrorLine {
  const range = converterRange(design, result.range)
  const { fit } = result
  const predicted = 'trim' in result ? result.trim.predicted : null
  return {
    errorAt: (x) => fit.offsetErrorV + (fit.gainErrorPpm / 1e6) * (x - range.x0),
    standardUncertaintyAt: (x) => uncertaintyAt(fit, range, x)?.u ?? null,
    errorUncertaintyAt(x) {
      const part = uncertaintyAt(fit, range, x)
      return part === null ? null : expand(part, fit.dof ?? Number.POSITIVE_INFINITY).expanded
    },
    predictedErrorAt: (x) =>
      predicted === null ? null : predicted.offsetErrorV + (predicted.gainErrorPpm / 1e6) * (x - range.x0),
  }
}

/** From the reported uncertainties, which hold the instrument: their combination at x is fit + (u_ig·x)² + u_io². */
function uncertaintyAt(fit: FitResult, range: ConverterRange, x: number) {
  const std = fit.standardUncertainty
  if (std === null) return null
  const z = x - range.x0
  const gain = std.gainPpm / 1e6
  const u2 = std.offsetV * std.offsetV + z * (2 * (std.covarianceVPpm / 1e6) + z * gain * gain)
  const instr = instrumentU(fit.instrument)
  const common = instr.gain * x * (instr.gain * x) + instr.offset * instr.offset
  const whole = Math.max(u2, common)
  return { u: Math.sqrt(whole), fit: Math.sqrt(whole - common) }
}
