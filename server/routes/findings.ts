import { listFindings, postAnswer, postClosing, postFinding } from '../../shared/contract/findings.ts'
import { answerFinding } from '../commands/findings/answer-finding.ts'
import { listFindings as list } from '../commands/findings/read-findings.ts'
import { writeFinding } from '../commands/findings/write-finding.ts'
import type { Principal } from '../http/principal.ts'
import type { Serve } from '../http/serve.ts'
import type { RouteDeps } from './route-deps.ts'

export function findingRoutes(serve: Serve, deps: RouteDeps): void {
  serve(listFindings, async ({ query }) => list(deps.database.sql, query))

  serve(postFinding, async ({ body, principal, idempotencyKey: key }) =>
    writeFinding(deps, { ...body, by: writerOf(principal), key }),
  )

  serve(postAnswer, async ({ params, body, principal, idempotencyKey: key }) =>
    answerFinding(deps, { ...body, finding: params.id, act: 'answer', by: writerOf(principal), key }),
  )

  serve(postClosing, async ({ params, body, principal, idempotencyKey: key }) =>
    answerFinding(deps, { ...body, finding: params.id, act: 'close', by: writerOf(principal), key }),
  )
}

const writerOf = ({ id, name }: Principal) => ({ id, name })
