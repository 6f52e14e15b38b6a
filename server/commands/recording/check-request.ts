import type { RecordRequest } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import type { Recorder } from './job.ts'

/** What can be refused without looking at any unit: parts that do not go together, and who may say what. */
export function checkRequest(request: RecordRequest, recorder: Recorder): void {
  if (request.kind === 'trim' || request.kind === 'verify') checkMeasurement(request)
  else checkStatement(request, recorder)
}

function checkMeasurement(request: RecordRequest): void {
  if (request.points === undefined) refuse('/points', `A ${request.kind} needs points.`)
  if (request.kind === 'verify' && request.effects === 'learned') {
    refuse('/effects', 'A verification computes no codes, so there is nothing to learn effects for.')
  }
}

function checkStatement(request: RecordRequest, { by, role }: Recorder): void {
  if (by.kind === 'token') {
    throw new OgeeError(
      'override-needs-a-person',
      `An ${request.kind === 'override' ? 'override' : 'error to withdraw'} is for an engineer to judge: sign in as a person.`,
    )
  }
  if (role !== 'engineer') {
    throw new OgeeError('forbidden', `A record of kind ${request.kind} needs the role engineer.`)
  }
  for (const field of ['points', 'applied', 'claimed'] as const) {
    if (request[field] !== undefined)
      refuse(`/${field}`, `A record of kind ${request.kind} takes no ${field}.`)
  }
  if (request.conditions?.instrument !== undefined) {
    refuse('/conditions/instrument', `A record of kind ${request.kind} measures nothing.`)
  }
  if (request.follows === undefined) refuse('/follows', 'Say which record is meant.')
  if ([...(request.reason ?? '').trim()].length < limits.reasonMin) {
    throw new OgeeError('reason-required', `Give a reason of at least ${limits.reasonMin} characters.`, {
      errors: [{ path: '/reason', message: `At least ${limits.reasonMin} characters.` }],
    })
  }
}

function refuse(path: string, message: string): never {
  throw new OgeeError('invalid-request', message, { errors: [{ path, message }] })
}
