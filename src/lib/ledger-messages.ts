import type { KeptNote, LedgerReport } from '../../shared/ledger/check/check-ledger.ts'

/** What the page and the worker that checks the whole ledger say to each other. */
export type ToLedgerWorker = {
  /** The verifier key to check with, as in ogee.pub. */
  key: string
  kept: readonly KeptNote[]
}
export type FromLedgerWorker =
  | { kind: 'progress'; done: number; size: number }
  | { kind: 'done'; report: LedgerReport }
  | { kind: 'failed'; message: string }
