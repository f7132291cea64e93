import type { Request, RequestHandler } from 'express'
import { ipKeyGenerator, rateLimit } from 'express-rate-limit'
import { AppError } from '#shared/errors.ts'

/** How often one address (or one account) may ask; the counts are in memory and start anew with the server. */
export interface RateLimits {
  /** Sign-ins from one address in 15 minutes. */
  signIn: number
  /** Wrong passwords for one account in 15 minutes, from wherever they come. */
  wrongPasswords: number
  /** New accounts from one address in an hour. */
  signUp: number
  /** Plans from one address in a minute. */
  plan: number
  /** Design notes from one address in a minute. */
  note: number
}

export const defaultRateLimits: RateLimits = {
  signIn: 60,
  wrongPasswords: 10,
  signUp: 30,
  plan: 120,
  note: 20,
}

const minute = 60_000

const addressOf = (request: Request): string => ipKeyGenerator(request.ip ?? 'unknown')

interface Rule {
  limit: number
  window: number
  what: string
  key?: (request: Request) => string
  countFailuresOnly?: boolean
}

function createLimit({
  limit,
  window,
  what,
  key = addressOf,
  countFailuresOnly = false,
}: Rule): RequestHandler {
  return rateLimit({
    limit,
    windowMs: window,
    keyGenerator: key,
    skipSuccessfulRequests: countFailuresOnly,
    requestWasSuccessful: (_, response) => response.statusCode !== 401,
    standardHeaders: 'draft-7',
    legacyHeaders: false,
    handler: (request, _response, next) => {
      const info = (request as Request & { rateLimit?: { resetTime?: Date } }).rateLimit
      const wait = Math.max(1, Math.ceil(((info?.resetTime?.getTime() ?? 0) - Date.now()) / 1000))
      next(
        new AppError('rate_limited', `Too many ${what}. Try again in ${inWords(wait)}.`, {
          retryAfter: wait,
        }),
      )
    },
  })
}

const inWords = (seconds: number): string =>
  seconds < 90 ? `${seconds} seconds` : `${Math.ceil(seconds / 60)} minutes`

/** The account that a sign-in is for, as it was typed. */
function accountOf(request: Request): string {
  const email = (request.body as { email?: unknown } | undefined)?.email
  return typeof email === 'string' ? email.trim().toLowerCase().slice(0, 254) : ''
}

export function createRateLimits(limits: RateLimits) {
  return {
    signIn: [
      createLimit({ limit: limits.signIn, window: 15 * minute, what: 'sign-ins from this address' }),
      createLimit({
        limit: limits.wrongPasswords,
        window: 15 * minute,
        what: 'wrong passwords for this account',
        key: accountOf,
        countFailuresOnly: true,
      }),
    ],
    signUp: [
      createLimit({ limit: limits.signUp, window: 60 * minute, what: 'new accounts from this address' }),
    ],
    plan: [createLimit({ limit: limits.plan, window: minute, what: 'plans from this address' })],
    note: [createLimit({ limit: limits.note, window: minute, what: 'design notes from this address' })],
  }
}
