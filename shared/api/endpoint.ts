import { z } from 'zod'
import type { Action } from './permissions.ts'

/**
 * Who may call: `public` needs no account, an action needs a role in the workspace of the path that allows it. There
 * is no default: an endpoint that does not say cannot be declared.
 */
export type Access = 'public' | Action

export type Method = 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE'

const nothing = z.strictObject({})
const noBody = z.undefined()
type Nothing = typeof nothing
type NoBody = typeof noBody

export interface Endpoint<
  Params extends z.ZodType = z.ZodType,
  Query extends z.ZodType = z.ZodType,
  Body extends z.ZodType = z.ZodType,
  Response extends z.ZodType = z.ZodType,
> {
  method: Method
  /** Express notation: `/api/workspaces/:workspaceId`. */
  path: string
  access: Access
  params: Params
  query: Query
  body: Body
  response: Response
  /** Status of success. */
  status: 200 | 201 | 204
  /** `pdf`: the answer is a file, `response` does not apply. */
  produces: 'json' | 'pdf' | 'nothing'
  /** True where the request must carry `If-Match: "<version>"` and the answer carries an `ETag`. */
  versioned: boolean
  /**
   * True where a POST only computes: it stores nothing and looks at no session, so programs may call it without
   * proving that the request comes from this application's own pages.
   */
  computes: boolean
}

interface EndpointSpec<P, Q, B, R> {
  method: Method
  path: string
  access: Access
  params?: P
  query?: Q
  body?: B
  response?: R
  status?: 200 | 201 | 204
  produces?: 'json' | 'pdf'
  versioned?: boolean
  computes?: boolean
}

/** Declares one route; what is left out is "nothing accepted" and "nothing answered". */
export function endpoint<
  P extends z.ZodType = Nothing,
  Q extends z.ZodType = Nothing,
  B extends z.ZodType = NoBody,
  R extends z.ZodType = NoBody,
>(spec: EndpointSpec<P, Q, B, R>): Endpoint<P, Q, B, R> {
  const produces = spec.produces ?? (spec.response ? 'json' : 'nothing')
  return {
    method: spec.method,
    path: spec.path,
    access: spec.access,
    // The casts are sound: a type parameter falls back to its default exactly where the key is absent.
    params: spec.params ?? (nothing as z.ZodType as P),
    query: spec.query ?? (nothing as z.ZodType as Q),
    body: spec.body ?? (noBody as z.ZodType as B),
    response: spec.response ?? (noBody as z.ZodType as R),
    status: spec.status ?? (produces === 'nothing' ? 204 : 200),
    produces,
    versioned: spec.versioned ?? false,
    computes: spec.computes ?? false,
  }
}

export type ParamsOf<E extends Endpoint> = z.output<E['params']>
export type QueryOf<E extends Endpoint> = z.output<E['query']>
export type BodyOf<E extends Endpoint> = z.output<E['body']>
export type ResponseOf<E extends Endpoint> = z.output<E['response']>

/** Puts parameters and query into the path: `toUrl(channelsApi.list, { workspaceId, projectId })`. */
export function toUrl<E extends Endpoint>(
  target: E,
  params: z.input<E['params']>,
  query?: z.input<E['query']>,
): string {
  const values = (params ?? {}) as Record<string, string>
  const path = target.path.replace(/:([A-Za-z]+)/g, (_, name: string) => {
    const value = values[name]
    if (value === undefined) throw new RangeError(`The path ${target.path} needs "${name}".`)
    return encodeURIComponent(value)
  })
  const search = new URLSearchParams()
  for (const [key, value] of Object.entries((query ?? {}) as Record<string, unknown>))
    if (value !== undefined) search.set(key, String(value))
  const text = search.toString()
  return text ? `${path}?${text}` : path
}

/** The header that every state-changing request carries; a form on another site cannot send it. */
export const requestHeader = { name: 'X-Spandrel', value: '1' } as const
