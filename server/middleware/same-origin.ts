import type { Request } from 'express'
import { type Endpoint, requestHeader } from '#shared/api/endpoint.ts'
import { AppError } from '#shared/errors.ts'

function refuse(): never {
  throw new AppError(
    'cross_site',
    'This request did not come from this application’s own pages, so it was refused.',
  )
}

/**
 * Refuses changes that another site's page could have caused. The browser says where a request comes from
 * (`Sec-Fetch-Site`, `Origin`), and only our own code can set our header. What merely computes needs no such proof,
 * but a browser that says "cross-site" is refused there as well.
 */
export function checkSameOrigin(request: Request, endpoint: Endpoint, publicOrigin: string | null): void {
  if (endpoint.method === 'GET') return
  const site = request.get('Sec-Fetch-Site')
  const origin = request.get('Origin')
  const own = publicOrigin ?? `${request.protocol}://${request.get('Host')}`
  if (site !== undefined && site !== 'same-origin') refuse()
  if (origin !== undefined && origin !== own) refuse()
  if (endpoint.computes) return
  if (site === undefined && origin === undefined) refuse()
  if (request.get(requestHeader.name) !== requestHeader.value) refuse()
}
