import { someUnitsExit } from '../../shared/contract/exit.ts'
import { grouped } from '../record-rendering.ts'
import type { Item } from './item.ts'

/** What became of a batch, counted. */
export type Summary = {
  /** Measurements with an answer, and things that are wrong with the input. */
  lines: number
  good: number
  notGood: number
  /** Of those with an answer: recorded before, by an earlier run. */
  replayed: number
  /** Of those with an answer: put down in the spool, not yet sent. */
  spooled: number
  /** By verdict, and by the code of a refusal. */
  outcomes: Record<string, number>
  /** Sent, and not known to be recorded. */
  notDone: number
}

/** Counts items as they are printed. */
export class Tally {
  readonly summary: Summary = {
    lines: 0,
    good: 0,
    notGood: 0,
    replayed: 0,
    spooled: 0,
    outcomes: {},
    notDone: 0,
  }
  /** Line of the first measurement that is not known to be recorded. */
  firstNotDone: number | null = null
  lastLine = 0
  /** Some of the records have codes to load. */
  hasCodes = false
  /** A refusal that is no fault of the unit's: a defect, or something that is not allowed. */
  private trouble = 0

  add(items: readonly Item[]): void {
    for (const item of items) this.addOne(item)
  }

  private addOne({ outcome, line }: Item): void {
    const { summary } = this
    this.lastLine = Math.max(this.lastLine, line)
    if (outcome === null) {
      summary.notDone += 1
      this.firstNotDone ??= line
      return
    }
    summary.lines += 1
    if (outcome.exit === 0) summary.good += 1
    else summary.notGood += 1
    if (this.trouble === 0 && outcome.exit >= 70) this.trouble = outcome.exit
    const name = 'record' in outcome ? (outcome.record.verdict ?? outcome.record.kind) : outcome.problem.code
    summary.outcomes[name] = (summary.outcomes[name] ?? 0) + 1
    if (!('record' in outcome)) return
    const { result, notices } = outcome.record
    if (notices.some(({ code }) => code === 'replayed')) summary.replayed += 1
    if ('spooled' in outcome.record) summary.spooled += 1
    this.hasCodes ||= result?.format === 'ogee.codes/1' && result.trim.codes !== null
  }

  get exit(): number {
    if (this.trouble !== 0) return this.trouble
    return this.summary.notGood > 0 ? someUnitsExit : 0
  }
}

/** `1 004 units: 990 ok, 12 out of reach, 2 csv cell; 4 of them recorded before.` */
export function summaryText({ lines, outcomes, replayed, spooled }: Summary): string {
  const parts = Object.entries(outcomes)
    .sort(([, a], [, b]) => b - a)
    .map(([name, n]) => `${grouped(n)} ${name.replaceAll('-', ' ')}`)
  const before = replayed === 0 ? '' : `; ${grouped(replayed)} recorded before`
  const kept = spooled === 0 ? '' : `; ${grouped(spooled)} in the spool, not yet sent`
  const counts = parts.length > 0 ? `: ${parts.join(', ')}` : ''
  return `${grouped(lines)} ${lines === 1 ? 'unit' : 'units'}${counts}${before}${kept}.`
}
