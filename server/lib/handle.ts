import type { IRouter, Request, RequestHandler, Response } from 'express'
import type { z } from 'zod'
import type { BodyOf, Endpoint, ParamsOf, QueryOf, ResponseOf } from '#shared/api/endpoint.ts'
import { AppError, type FieldErrors } from '#shared/errors.ts'
import { findMember, type Member, notFound, requireAllowed } from '#server/middleware/membership.ts'
import { checkSameOrigin } from '#server/middleware/same-origin.ts'
import type { Db } from './db.ts'

/** A file as an answer. */
export interface FileAnswer {
  bytes: Buffer
  /** Name to save it under, without folders. */
  name: string
}

/** What a handler is given: everything checked, nothing raw unless it asks for `request`. */
export interface Call<E extends Endpoint> {
  params: ParamsOf<E>
  query: QueryOf<E>
  body: BodyOf<E>
  request: Request
  response: Response
}

export interface MemberCall<E extends Endpoint> extends Call<E> {
  member: Member
  /** From `If-Match`; 0 where the endpoint is not versioned. */
  version: number
}

/** Endpoints without a response schema answer with nothing or with a file. */
type Answer<E extends Endpoint> = undefined extends ResponseOf<E> ? void | FileAnswer : ResponseOf<E>

export interface Handling {
  router: IRouter
  db: Db
  publicOrigin: string | null
}

/** Registers an endpoint that needs no account. */
export function handlePublic<E extends Endpoint>(
  { router, publicOrigin }: Handling,
  endpoint: E,
  handler: (call: Call<E>) => Answer<E> | Promise<Answer<E>>,
  before: RequestHandler[] = [],
): void {
  if (endpoint.access !== 'public') throw new Error(`${endpoint.method} ${endpoint.path} is not public`)
  register(router, endpoint, before, async (request, response) => {
    checkSameOrigin(request, endpoint, publicOrigin)
    const params = parseParams(endpoint, request)
    const answer = await handler({ params, ...parseInput(endpoint, request), request, response })
    send(endpoint, response, answer)
  })
}

/**
 * Registers an endpoint of a workspace. In this order: signed in (401), member (404), allowed (403), version given
 * (428), well-formed (400). So a stranger learns nothing, not even what a valid body looks like.
 */
export function handleMember<E extends Endpoint>(
  { router, db, publicOrigin }: Handling,
  endpoint: E,
  handler: (call: MemberCall<E>) => Answer<E> | Promise<Answer<E>>,
  before: RequestHandler[] = [],
): void {
  const action = endpoint.access
  if (action === 'public') throw new Error(`${endpoint.method} ${endpoint.path} needs no membership`)
  register(router, endpoint, before, async (request, response) => {
    checkSameOrigin(request, endpoint, publicOrigin)
    const params = request.user ? parseParams(endpoint, request) : undefined
    const workspaceId = (params as { workspaceId?: string } | undefined)?.workspaceId
    const member = await findMember(db, request.user, workspaceId)
    requireAllowed(member, action)
    const version = endpoint.versioned ? parseIfMatch(request) : 0
    const input = parseInput(endpoint, request)
    const answer = await handler({
      params: params as ParamsOf<E>,
      ...input,
      request,
      response,
      member,
      version,
    })
    send(endpoint, response, answer)
  })
}

function register(
  router: IRouter,
  endpoint: Endpoint,
  before: RequestHandler[],
  handler: (request: Request, response: Response) => Promise<void>,
): void {
  const route = router.route(endpoint.path)
  const method = endpoint.method.toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete'
  route[method](...before, handler)
}

const parseParams = <E extends Endpoint>(endpoint: E, request: Request): ParamsOf<E> => {
  const parsed = endpoint.params.safeParse({ ...request.params })
  if (!parsed.success) throw notFound()
  return parsed.data as ParamsOf<E>
}

function parseInput<E extends Endpoint>(
  endpoint: E,
  request: Request,
): { query: QueryOf<E>; body: BodyOf<E> } {
  const body: unknown = request.body
  if (hasBody(request) && body === undefined)
    throw new AppError('unsupported_type', 'Send the body as application/json.')
  return {
    query: parsePart(endpoint.query, { ...request.query }, 'The address') as QueryOf<E>,
    body: parsePart(endpoint.body, body, 'The request') as BodyOf<E>,
  }
}

function hasBody(request: Request): boolean {
  return request.get('Transfer-Encoding') !== undefined || Number(request.get('Content-Length') ?? 0) > 0
}

function parsePart(schema: z.ZodType, value: unknown, what: string): unknown {
  const parsed = schema.safeParse(value)
  if (parsed.success) return parsed.data
  const fields: FieldErrors = {}
  for (const issue of parsed.error.issues) fields[issue.path.join('.')] ??= issue.message
  const [first] = Object.entries(fields)
  const where = first?.[0] ? `${first[0]}: ${first[1]}` : (first?.[1] ?? '')
  throw new AppError('invalid_input', `${what} was not understood. ${where}`, { fields })
}

/** One strong tag and nothing else: a list or `*` would mean "whatever stands there", which is how work is lost. */
function parseIfMatch(request: Request): number {
  const header = request.get('If-Match')
  if (header === undefined)
    throw new AppError('version_required', 'Say which version this changes: If-Match: "3", as it was read.')
  const found = /^"(\d{1,15})"$/.exec(header.trim())
  if (!found) throw new AppError('bad_request', 'If-Match must hold one version in quotes, such as "3".')
  return Number(found[1])
}

const isFile = (answer: unknown): answer is FileAnswer =>
  typeof answer === 'object' && answer !== null && Buffer.isBuffer((answer as { bytes?: unknown }).bytes)

/** Only what the contract lists leaves the server: the response schema cuts off everything else. */
function send(endpoint: Endpoint, response: Response, answer: unknown): void {
  response.status(endpoint.status)
  if (isFile(answer)) {
    response.set({
      'Content-Type': 'application/pdf',
      'Content-Disposition': contentDisposition(answer.name),
      'Content-Length': String(answer.bytes.length),
    })
    response.end(answer.bytes)
    return
  }
  if (endpoint.produces === 'nothing') {
    response.end()
    return
  }
  const body = endpoint.response.parse(answer) as { version?: unknown }
  if (typeof body.version === 'number') response.set('ETag', `"${body.version}"`)
  response.json(body)
}

/** RFC 6266: a plain name for old readers, the full one in UTF-8 beside it. */
function contentDisposition(name: string): string {
  const plain = name.normalize('NFKD').replace(/[^A-Za-z0-9._ -]/g, '')
  const full = encodeURIComponent(name).replace(
    /['()*]/g,
    (c) => `%${c.charCodeAt(0).toString(16).toUpperCase()}`,
  )
  return `attachment; filename="${plain || 'file'}"; filename*=UTF-8''${full}`
}
