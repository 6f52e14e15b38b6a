import type { SizingDesign } from '../../shared/solver/sizing/types.ts'
import type { YieldOptions } from '../../shared/solver/yield/simulate.ts'
import type { YieldResult } from '../../shared/solver/yield/types.ts'

/** What the page and the simulating worker say to each other. One worker runs one simulation and is then let go. */

export type ToYieldWorker =
  | { kind: 'start'; design: SizingDesign; options: YieldOptions }
  /** Ends it with what is there: `done` follows, with `stopped` set. */
  | { kind: 'stop' }

export type FromYieldWorker =
  | { kind: 'progress'; done: number; trials: number; result: YieldResult }
  | { kind: 'done'; result: YieldResult }
  /** The design cannot be simulated; the sentence names the place and the remedy. */
  | { kind: 'refused'; message: string }
