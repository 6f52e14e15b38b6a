import { bitsAmount, volts } from '../../../shared/design-words/words.ts'
import type { Ladder, Rung } from '../../../shared/solver/sizing/ladder.ts'
import { fixed } from '../../ui/number-format.ts'
import type { PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { labelDecimals } from '../../ui/plot/plot-numbers.ts'
import { verdictWord } from '../../ui/verdict.tsx'

/** What the ladder says: to the eye beside its marks, to the ear one sentence a rung. */

export const verdictNames = { covers: 'covers', short: 'short', coarse: 'too-coarse', both: 'both' } as const

/** The budget asks more on the tighter side than is reached, or nothing is reached there. */
export const isShort = ({ bracket, shortBits, reachV }: Ladder): boolean =>
  bracket !== null && (shortBits > 0 || reachV <= 0)

const lsbText = (lsb: number): string => `${fixed(lsb, labelDecimals(lsb))} LSB`

/** Off centre, the top bit is worth more than the tighter side reaches: it stands above the rails. */
export const isAboveRails = (ladder: Ladder, rung: Rung): boolean =>
  rung.kind !== 'missing' && rung.outputV - ladder.stepV > ladder.reachV * (1 + 1e-9)

export function rungWord(ladder: Ladder, rung: Rung): string {
  if (rung.kind === 'missing') return 'missing'
  if (isAboveRails(ladder, rung)) return 'above the reach of the tighter side'
  return rung.kind === 'needed' ? 'needed' : 'to spare'
}

/** "Bit 2, 14.9 µV at the output, 0.39 LSB, needed." */
export function rungSentence(ladder: Ladder, rung: Rung): string {
  const name = rung.kind !== 'missing' ? `Bit ${rung.bit}` : rung.bit < 0 ? 'A bit below' : 'A bit above'
  return `${name}, ${volts(rung.outputV)} at the output, ${lsbText(rung.lsb)}, ${rungWord(ladder, rung)}.`
}

/** "Reach 7.63 mV, 6.09 mV needed, 0.33 bit to spare." */
export function reachSentence({ reachV, bracket, shortBits, spareAboveBits }: Ladder): string {
  const reach = `Reach ${volts(reachV)}`
  if (bracket === null) return `${reach}, nothing is asked of it.`
  const needed = `${reach}, ${volts(bracket.topV)} needed`
  if (reachV <= 0) return `${needed}, nothing is reached on that side.`
  return shortBits > 0
    ? `${needed}, short by ${bitsAmount(shortBits)}.`
    : `${needed}, ${bitsAmount(spareAboveBits)} to spare.`
}

/** "Step 3.73 µV, 19.1 µV allowed, 2.35 bits to spare." */
export function stepSentence({ stepV, bracket, coarseBits, spareBelowBits }: Ladder): string {
  const step = `Step ${volts(stepV)}`
  if (bracket === null) return `${step}.`
  const allowed = `${step}, ${volts(bracket.bottomV)} allowed`
  return coarseBits > 0
    ? `${allowed}, too coarse by ${bitsAmount(coarseBits)}.`
    : `${allowed}, ${bitsAmount(spareBelowBits)} to spare.`
}

/** The whole ladder in one breath, for a screen reader. */
export function ladderSentence(ladder: Ladder): string {
  const name = ladder.which === 'gain' ? 'Gain' : 'Offset'
  const verdict = verdictWord(verdictNames[ladder.state])
  return `${name} ${verdict}. ${reachSentence(ladder)} ${stepSentence(ladder)}`
}

/** The ladders as a table, highest rung first, and as CSV with every digit. */
export function ladderTable(ladders: readonly Ladder[]): PlotTableData {
  const rows = ladders.flatMap((ladder) =>
    [...ladder.rungs].sort((a, b) => b.bit - a.bit).map((rung) => ({ ladder, rung })),
  )
  return {
    head: ['adjuster', 'bit', 'at the output', 'LSB', 'ppm of FSR', 'kind'],
    rows: rows.map(({ ladder, rung }) => [
      ladder.which,
      fixed(rung.bit, 0),
      volts(rung.outputV),
      fixed(rung.lsb, labelDecimals(rung.lsb)),
      fixed(rung.ppm, labelDecimals(rung.ppm)),
      rungWord(ladder, rung),
    ]),
    csvHead: ['adjuster', 'bit', 'output_v', 'lsb', 'ppm_of_fsr', 'kind'],
    csvRows: rows.map(({ ladder, rung }) => [
      ladder.which,
      rung.bit,
      rung.outputV,
      rung.lsb,
      rung.ppm,
      rung.kind,
    ]),
  }
}
