import type { SimulatedMeasurement } from './unit.ts'

/** The points CSV of simulated units: a header once, then the rows of each. */

export const simulatedHeader = (readings: number): string =>
  `unit,channel,range,code,${readings > 1 ? 'readings' : 'measured'}\n`

/** A name with a comma, quote or line break is quoted as RFC 4180 says. */
const cell = (text: string) => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text)

export function simulatedRows({ unit, channel, range, points }: SimulatedMeasurement): string {
  const head = [unit, channel, range].map(cell).join(',')
  return points.map(({ code, readings }) => `${head},${code},${readings.join(';')}\n`).join('')
}
