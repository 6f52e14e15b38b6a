import type { Outcome, Verdict } from './primitives.ts'

/** Exit codes of verdicts, 10 to 20. Trouble has its codes in `shared/errors.ts`; trouble goes before verdicts. */
export const verdictExit = {
  ok: 0,
  'out-of-reach': 10,
  'too-coarse': 11,
  suspect: 12,
  pass: 0,
  fail: 13,
  'conditional-pass': 14,
  'conditional-fail': 15,
} as const satisfies Record<Verdict | Outcome, number>

/** Exit codes of a sizing, and of a network with an obstacle (`short`). */
export const sizeExit = { covers: 0, short: 10, both: 10, coarse: 11 } as const

/** A proof, receipt, checkpoint or ledger that does not check. */
export const proofFailsExit = 16
/** A batch, or `spool send`, that finished while some units are not good. */
export const someUnitsExit = 20
