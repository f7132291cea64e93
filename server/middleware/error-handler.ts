import type { ErrorRequestHandler } from 'express'
import { AppError, toErrorBody } from '#shared/errors.ts'
import { describeError, type Logger } from '#server/lib/logger.ts'

/** What the parser of bodies, the router and SQLite call their errors. */
interface ForeignError {
  type?: string
  code?: string
  status?: number
}

const parserErrors: Record<string, () => AppError> = {
  'entity.parse.failed': () => new AppError('bad_request', 'The body is not valid JSON.'),
  'entity.verify.failed': () => new AppError('bad_request', 'The body is not valid JSON.'),
  'entity.too.large': () => new AppError('too_large', 'The body is too large; at most 256 kB are accepted.'),
  'encoding.unsupported': () => new AppError('unsupported_type', 'This content encoding is not accepted.'),
  'charset.unsupported': () => new AppError('unsupported_type', 'Send JSON in UTF-8.'),
  'request.aborted': () => new AppError('bad_request', 'The request ended before its body was complete.'),
  'request.size.invalid': () => new AppError('bad_request', 'The body is not as long as its header says.'),
}

/** The database cannot take writes just now: full, locked or read-only. */
const isDatabaseTrouble = (code: string | undefined): boolean =>
  /^SQLITE_(FULL|BUSY|READONLY|IOERR|CANTOPEN|LOCKED)/.test(code ?? '')

function known(error: unknown): AppError | null {
  if (error instanceof AppError) return error
  const foreign = (typeof error === 'object' && error !== null ? error : {}) as ForeignError
  const fromParser = foreign.type === undefined ? undefined : parserErrors[foreign.type]
  if (fromParser) return fromParser()
  if (/^(Z_|ERR_BROTLI|ERR__ERROR_FORMAT|ERR_.*BROTLI)/.test(foreign.code ?? ''))
    return new AppError('bad_request', 'The body is not validly compressed.')
  if (error instanceof URIError)
    return new AppError('bad_request', 'The address holds a broken percent sign.')
  const driver = (error as { driverError?: ForeignError } | null)?.driverError
  if (isDatabaseTrouble(foreign.code ?? driver?.code))
    return new AppError(
      'busy',
      'The server cannot store anything just now. Nothing was changed; try again soon.',
      {
        cause: error,
        retryAfter: 30,
      },
    )
  return null
}

/** Answers every error in one shape; an unexpected one goes to the log and only its number to the person. */
export function errorHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, request, response, next) => {
    const expected = known(error)
    const answer =
      expected ??
      new AppError('internal', 'Something went wrong here, not with you. Nothing was changed. Try again.')
    const requestId = request.requestId
    if (!expected || expected.code === 'busy' || expected.code === 'internal')
      logger.error('failed', { requestId, ...describeError(expected?.cause ?? error) })
    else if (['forbidden', 'cross_site', 'rate_limited', 'wrong_credentials'].includes(expected.code))
      logger.warn('refused', { requestId, code: expected.code, userId: request.user?.id })
    if (response.headersSent) {
      next(error)
      return
    }
    if (answer.retryAfter !== undefined) response.set('Retry-After', String(answer.retryAfter))
    response.set('Cache-Control', 'no-store')
    response.status(answer.status).json(toErrorBody(answer, requestId))
  }
}
