import type { RequestHandler } from 'express'
import type { Logger } from 'pino'
import type { Config } from '../config.ts'
import type { Database } from '../db/connection.ts'
import type { Signer } from '../ledger/signer.ts'
import type { SetupSecret } from '../policies/setup-secret.ts'

/** How much one caller may do. Windows are a minute for tokens, fifteen minutes for sign-in. */
export type Quotas = {
  requestsPerTokenMinute: number
  failedSignInsPerAccountAndAddress: number
  failedSignInsPerAddress: number
}

export const defaultQuotas: Quotas = {
  requestsPerTokenMinute: 600_000,
  failedSignInsPerAccountAndAddress: 10,
  failedSignInsPerAddress: 60,
}

/** Everything the app is built from, so that tests build the same app from a test database and a clock of their own. */
export type Deps = {
  database: Database
  signer: Signer
  /** File of the ledger's private key. */
  keyFile: string
  /** How the database contradicts the checkpoints that were kept outside of it; then nothing is recorded or signed. */
  historyFault?: string | null
  /** Signs session cookies; stands in no database. */
  sessionSecret: string
  /** Tells the sequencer that something was recorded. */
  notifyLedger: () => void
  now: () => Date
  logger: Logger
  config: Pick<Config, 'baseUrl' | 'tls' | 'trustedHops' | 'webRoot' | 'dev' | 'selfRelease'>
  setup: SetupSecret
  quotas: Quotas
  /** Serves the page while developing, in place of the built one. */
  devPage?: RequestHandler
  /** Checks every reply against its schema: for tests, where a breach is a defect. */
  checkReplies?: boolean
}
