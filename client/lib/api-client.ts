import { errorBodySchema, type ErrorCode, type FieldErrors } from '#shared/errors.ts'
import { requestHeader, toUrl, type Endpoint, type ResponseOf } from '#shared/api/endpoint.ts'
import type { z } from 'zod'

/** An answer of the server that is not a success, or no answer at all (`code` then is `offline`). */
export class ApiError extends Error {
  override name = 'ApiError'
  readonly code: ErrorCode | 'offline'
  readonly fields: FieldErrors
  readonly requestId: string | null
  /** The whole body: some errors carry more, such as the current version of what was stale. */
  readonly body: unknown

  constructor(
    code: ErrorCode | 'offline',
    message: string,
    more: { fields?: FieldErrors; requestId?: string; body?: unknown; cause?: unknown } = {},
  ) {
    super(message, more.cause === undefined ? undefined : { cause: more.cause })
    this.code = code
    this.fields = more.fields ?? {}
    this.requestId = more.requestId ?? null
    this.body = more.body
  }
}

export interface CallOptions<E extends Endpoint> {
  params?: z.input<E['params']>
  query?: z.input<E['query']>
  body?: z.input<E['body']>
  /** Goes into `If-Match` of a versioned endpoint. */
  version?: number
  signal?: AbortSignal
}

/** Calls an endpoint and reads the answer by its schema. Rejects with `ApiError`, or as the signal says. */
export async function call<E extends Endpoint>(
  target: E,
  options: CallOptions<E> = {},
): Promise<ResponseOf<E>> {
  const response = await send(target, options)
  if (target.produces === 'nothing' || response.status === 204) return undefined as ResponseOf<E>
  const parsed = target.response.safeParse(await response.json().catch(() => undefined))
  if (!parsed.success) {
    throw new ApiError(
      'internal',
      'The server gave an answer that this page does not understand. Load it again.',
      {
        cause: parsed.error,
      },
    )
  }
  return parsed.data as ResponseOf<E>
}

/** As `call`, for endpoints that answer with a file. */
export async function callForFile<E extends Endpoint>(
  target: E,
  options: CallOptions<E> = {},
): Promise<Blob> {
  return (await send(target, options)).blob()
}

async function send<E extends Endpoint>(target: E, options: CallOptions<E>): Promise<Response> {
  const headers: Record<string, string> = {
    Accept: target.produces === 'pdf' ? 'application/pdf' : 'application/json',
  }
  if (target.method !== 'GET') headers[requestHeader.name] = requestHeader.value
  if (options.body !== undefined) headers['Content-Type'] = 'application/json'
  if (options.version !== undefined) headers['If-Match'] = `"${options.version}"`
  let response: Response
  try {
    // An endpoint without parameters takes the empty object.
    const params = options.params ?? ({} as z.input<E['params']>)
    response = await fetch(toUrl(target, params, options.query), {
      method: target.method,
      credentials: 'same-origin',
      headers,
      ...(options.body === undefined ? {} : { body: JSON.stringify(options.body) }),
      ...(options.signal ? { signal: options.signal } : {}),
    })
  } catch (cause) {
    if (options.signal?.aborted) throw cause
    throw new ApiError('offline', 'The server cannot be reached. Check the connection.', { cause })
  }
  if (!response.ok) throw await toApiError(response)
  return response
}

async function toApiError(response: Response): Promise<ApiError> {
  const body: unknown = await response.json().catch(() => null)
  const parsed = errorBodySchema.safeParse(body)
  if (!parsed.success) {
    const message = response.status >= 500 ? 'The server failed.' : 'The request was refused.'
    return new ApiError('internal', `${message} Status ${response.status}.`, { body })
  }
  const { code, message, fields, requestId } = parsed.data.error
  return new ApiError(code, message, { ...(fields ? { fields } : {}), requestId, body })
}

/** What to say about a failure of any kind, in one sentence. */
export function messageOf(error: unknown): string {
  return error instanceof Error && error.message !== ''
    ? error.message
    : 'Something failed that has no description.'
}
