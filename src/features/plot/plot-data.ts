/** What the plots draw: plain numbers in volts, so that a live fit and a stored record are drawn by the same code. */

export type PlotUnit = 'LSB' | 'ppm' | 'V'

export type PlotRange = { lowV: number; highV: number; lsbV: number }

export type PlotPoint = {
  code: number
  idealV: number
  errorV: number
  residualV: number
  /** Half the length of the bar; null where there is none. */
  barV: number | null
  /** Drawn with a diamond around it and named in the label. */
  flagged?: boolean
}

/** e(x) = offsetV + slope · (x - pivotV), over the whole range. */
export type PlotLine = { offsetV: number; slope: number; pivotV: number }

export const lineAt = (line: PlotLine, x: number): number => line.offsetV + line.slope * (x - line.pivotV)

export const fullScaleV = (range: PlotRange): number => range.highV - range.lsbV

type Shown = { name: string; perVolt: number }

/** The unit as shown: volts take the prefix under which the largest value has one to five digits. */
export function shownUnit(unit: PlotUnit, range: PlotRange, largestV: number): Shown {
  if (unit === 'LSB') return { name: 'LSB', perVolt: 1 / range.lsbV }
  if (unit === 'ppm') return { name: 'ppm', perVolt: 1e6 / (range.highV - range.lowV) }
  if (largestV >= 10) return { name: 'V', perVolt: 1 }
  if (largestV >= 0.1) return { name: 'mV', perVolt: 1e3 }
  return { name: 'µV', perVolt: 1e6 }
}

/** Largest size among numbers, 0 for none. */
export const largest = (values: readonly number[]): number =>
  values.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
