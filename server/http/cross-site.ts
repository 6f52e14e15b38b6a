import type { Request } from 'express'
import { OgeeError } from '../../shared/errors.ts'

/**
 * An unsafe request that a browser could have been led to send must show that it comes from our own page: a header that no
 * form can set, and the browser's word on where it comes from. A request by token needs neither: no browser adds tokens.
 */
export function requireSameSite(request: Request, baseUrl: string | null): void {
  if (request.get('x-ogee') !== '1') {
    throw new OgeeError('cross-site-refused', 'The header x-ogee: 1 is missing.')
  }
  const site = request.get('sec-fetch-site')
  const origin = request.get('origin')
  const own = baseUrl ?? `${request.protocol}://${request.get('host') ?? ''}`
  if (origin !== undefined && origin !== own) {
    throw new OgeeError('cross-site-refused', 'The request comes from another site.')
  }
  // Without Sec-Fetch-Site (older browsers, scripts) a matching Origin says the same.
  if (site === undefined ? origin !== own : site !== 'same-origin') {
    throw new OgeeError('cross-site-refused', 'The request does not show that it comes from this site.')
  }
}
