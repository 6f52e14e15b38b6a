import { guarded } from '../points/formula-guard.ts'
import type { SimulatedMeasurement } from './unit.ts'

/** The points CSV of simulated units: a header once, then the rows of each. */

export type SimulatedColumns = {
  readings: number
  /** Codes were loaded. */
  applied?: boolean | undefined
  instrument?: string | undefined
}

export function simulatedHeader({ readings, applied, instrument }: SimulatedColumns): string {
  const more = [...(applied ? ['applied_gain', 'applied_offset'] : []), ...(instrument ? ['instrument'] : [])]
  return `${['unit', 'channel', 'range', ...more, 'code', readings > 1 ? 'readings' : 'measured'].join(',')}\n`
}

/** A name with a comma, quote or line break is quoted as RFC 4180 says. */
const cell = (text: string) => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text)

export function simulatedRows(
  { unit, channel, range, applied, points }: SimulatedMeasurement,
  { applied: hasApplied, instrument }: Omit<SimulatedColumns, 'readings'> = {},
): string {
  const codes = hasApplied ? [String(applied?.gain ?? ''), String(applied?.offset ?? '')] : []
  const head = [unit, channel, range, ...codes, ...(instrument ? [guarded(instrument)] : [])]
    .map(cell)
    .join(',')
  return points.map(({ code, readings }) => `${head},${code},${readings.join(';')}\n`).join('')
}
