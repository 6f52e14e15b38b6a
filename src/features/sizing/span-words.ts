import type { SpanCell } from '../../../shared/solver/sizing/span-table.ts'
import { fixed } from '../../ui/number-format.ts'
import { verdictWord } from '../../ui/verdict.tsx'
import { verdictNames } from './ladder-words.ts'

type Ends = { lowV: number; highV: number }
type Unit = { name: 'V' | 'mV'; perVolt: number }

/** One unit for all heads: volts, unless every span is smaller than a tenth. */
export function spanUnit(spans: readonly Ends[]): Unit {
  const largest = spans.reduce((most, { lowV, highV }) => Math.max(most, Math.abs(lowV), Math.abs(highV)), 0)
  return largest < 0.1 ? { name: 'mV', perVolt: 1e3 } : { name: 'V', perVolt: 1 }
}

const plain = (volts: number, { perVolt }: Unit): string =>
  String(Number((volts * perVolt).toPrecision(4))).replace('-', '\u2212')

/** "±2.5 V", or both ends. */
export function spanText({ lowV, highV }: Ends, unit: Unit): string {
  if (lowV === -highV) return `${highV > 0 ? '±' : '∓'}${plain(Math.abs(highV), unit)} ${unit.name}`
  return `${plain(lowV, unit)}…${plain(highV, unit)} ${unit.name}`
}

/** Bits to spare, signed: "+0.3". */
export const marginText = (bits: number): string => fixed(bits, 1, 'always')

/** "10 bits, ±5 V: too coarse, step −0.6 bits" */
export function cellSentence(name: string, cell: SpanCell): string {
  const own = cell.own ? ', this design' : ''
  return `${name}${own}: ${verdictWord(verdictNames[cell.verdict])}, step ${marginText(cell.stepSpareBits)} bits`
}
