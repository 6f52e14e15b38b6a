import type { Io } from '../io.ts'
import { grouped } from '../record-rendering.ts'
import type { Tally } from './summary.ts'

const everyMs = 250

/** How far a batch is, on a terminal's standard error; nowhere else, and not where the answers themselves scroll by. */
export class Progress {
  private readonly io: Io
  private readonly tally: Tally
  private readonly shows: boolean
  private readonly since: number
  private shownAt = Number.NEGATIVE_INFINITY

  constructor(io: Io, tally: Tally) {
    this.io = io
    this.tally = tally
    this.shows = io.stderrIsTerminal && !io.stdoutIsTerminal
    this.since = io.now()
  }

  show(): void {
    const now = this.io.now()
    if (!this.shows || now - this.shownAt < everyMs) return
    this.shownAt = now
    const { lines, notGood } = this.tally.summary
    const rate = Math.round((lines * 1000) / Math.max(1, now - this.since))
    this.io.sayOver(`${grouped(lines)} units, ${grouped(notGood)} not good, ${grouped(rate)} a second`)
  }

  clear(): void {
    if (this.shows) this.io.sayOver('')
  }
}
