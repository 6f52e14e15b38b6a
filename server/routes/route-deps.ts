import type { Deps } from '../http/deps.ts'
import type { TokenFinder } from '../http/find-token.ts'
import type { Sessions } from '../http/session.ts'

export type RouteDeps = Deps & { sessions: Sessions; tokens: TokenFinder }
