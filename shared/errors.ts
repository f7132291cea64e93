import { z } from 'zod'

/**
 * The one table of error codes. A code is part of the contract between server and client: the client decides by
 * code where a message is shown, never by status or text.
 */
export const errorStatus = {
  bad_request: 400,
  invalid_input: 400,
  weak_password: 400,
  not_signed_in: 401,
  wrong_credentials: 401,
  forbidden: 403,
  cross_site: 403,
  not_found: 404,
  method_not_allowed: 405,
  timeout: 408,
  conflict: 409,
  email_taken: 409,
  stale_version: 412,
  too_large: 413,
  unsupported_type: 415,
  design_refused: 422,
  version_required: 428,
  rate_limited: 429,
  headers_too_large: 431,
  internal: 500,
  busy: 503,
} as const satisfies Record<string, number>

export type ErrorCode = keyof typeof errorStatus

const errorCodes = Object.keys(errorStatus) as [ErrorCode, ...ErrorCode[]]

/** Path of a field → what is wrong with it and what is accepted. */
export type FieldErrors = Record<string, string>

/** What stands under `error` in every answer that is not a success. */
export const errorBodySchema = z.object({
  error: z.object({
    code: z.enum(errorCodes),
    message: z.string(),
    fields: z.record(z.string(), z.string()).optional(),
    requestId: z.string(),
  }),
})
export type ErrorBody = z.output<typeof errorBodySchema>

interface AppErrorOptions {
  fields?: FieldErrors
  /** Further top-level keys of the answer, e.g. the faults of a refused design. */
  details?: Record<string, unknown>
  /** What really happened; goes to the log, never to the person. */
  cause?: unknown
  /** Seconds after which trying again makes sense. */
  retryAfter?: number
}

/** An error that a person may read: the message names what is wrong and what to do. */
export class AppError extends Error {
  readonly code: ErrorCode
  readonly fields: FieldErrors | undefined
  readonly details: Record<string, unknown>
  readonly retryAfter: number | undefined

  constructor(code: ErrorCode, message: string, options: AppErrorOptions = {}) {
    super(message, options.cause === undefined ? undefined : { cause: options.cause })
    this.name = 'AppError'
    this.code = code
    this.fields = options.fields
    this.details = options.details ?? {}
    this.retryAfter = options.retryAfter
  }

  get status(): number {
    return errorStatus[this.code]
  }
}

/** The shape of an error on the wire. */
export function toErrorBody(error: AppError, requestId: string): ErrorBody & Record<string, unknown> {
  return {
    ...error.details,
    error: {
      code: error.code,
      message: error.message,
      ...(error.fields ? { fields: error.fields } : {}),
      requestId,
    },
  }
}
