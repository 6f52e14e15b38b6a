import type { RecordOne } from '../commands/recorder.ts'
import type { Deps } from '../http/deps.ts'
import type { TokenFinder } from '../http/find-token.ts'
import type { Sessions } from '../http/session.ts'
import type { TokenThrottle } from '../http/throttles.ts'

export type RouteDeps = Deps & {
  sessions: Sessions
  tokens: TokenFinder
  throttle: TokenThrottle
  /** One for all routes: what arrives together is recorded together. */
  record: RecordOne
}
