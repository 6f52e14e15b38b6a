import { findUnits } from '../../shared/contract/units.ts'
import { readUnits } from '../commands/read-units.ts'
import type { Serve } from '../http/serve.ts'
import type { RouteDeps } from './route-deps.ts'

export function unitRoutes(serve: Serve, { database }: RouteDeps): void {
  serve(findUnits, async ({ query, principal }) => ({ items: await readUnits(database, query, principal) }))
}
