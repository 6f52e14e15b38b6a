import type { Response } from 'express'
import type { ErrorCode } from '../../shared/errors.ts'
import type { Principal } from './principal.ts'

/** What middleware knows about a request, for replies and for the log. */
export type Locals = {
  id: string
  principal: Principal | null
  /** Code of the problem that was answered. */
  problem?: ErrorCode
  /** Cause of an answer of 500 and up: for the log only. */
  failure?: unknown
}

export function localsOf(response: Response): Locals {
  return response.locals as Locals
}
