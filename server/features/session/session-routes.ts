import type { Request, Response } from 'express'
import { type Session, sessionApi } from '#shared/api/session.ts'
import { AppError } from '#shared/errors.ts'
import type { Config } from '#server/config.ts'
import { type Handling, handlePublic } from '#server/lib/handle.ts'
import type { Logger } from '#server/lib/logger.ts'
import type { createRateLimits } from '#server/middleware/rate-limits.ts'
import { cookieName, type Sessions } from '#server/middleware/sessions.ts'
import { presentSession } from './session-presenter.ts'
import type { SessionService } from './session-service.ts'

interface Dependencies {
  config: Config
  service: SessionService
  passport: Sessions['passport']
  limits: ReturnType<typeof createRateLimits>
  logger: Logger
}

export function sessionRoutes(handling: Handling, dependencies: Dependencies): void {
  const { config, service, passport, limits, logger } = dependencies

  const present = async (user: Express.User | undefined): Promise<Session> =>
    presentSession(user ?? null, user ? await service.listMemberships(user.id) : [], config)

  /** A cookie that is bound to https would be dropped without a word on plain http: say so instead. */
  const requireHttps = (request: Request): void => {
    if (config.isSecure && !request.secure)
      throw new AppError(
        'bad_request',
        'Signing in works over https only: open the page with its https address.',
      )
  }

  handlePublic(handling, sessionApi.get, ({ request }) => present(request.user))

  handlePublic(
    handling,
    sessionApi.signIn,
    async ({ request, response, body }) => {
      requireHttps(request)
      request.body = body
      const user = await authenticate(passport, request, response)
      if (!user) {
        logger.warn('sign-in failed', { requestId: request.requestId })
        throw new AppError('wrong_credentials', 'E-mail address and password do not fit together. Try again.')
      }
      await signIn(request, user)
      logger.info('signed in', { requestId: request.requestId, userId: user.id })
      return present(user)
    },
    limits.signIn,
  )

  handlePublic(handling, sessionApi.signOut, async ({ request, response }) => {
    const userId = request.user?.id
    await endSession(request)
    response.clearCookie(cookieName(config.isSecure), { path: '/', secure: config.isSecure, httpOnly: true })
    response.set('Clear-Site-Data', '"cache"')
    if (userId) logger.info('signed out', { requestId: request.requestId, userId })
  })

  handlePublic(
    handling,
    sessionApi.signUp,
    async ({ request, body }) => {
      requireHttps(request)
      if (!config.isSignUpOpen)
        throw new AppError(
          'forbidden',
          'Accounts are made by invitation here: ask the owner of a workspace for one.',
        )
      const user = await service.signUp(body)
      await signIn(request, user)
      logger.info('signed up', { requestId: request.requestId, userId: user.id })
      return present(user)
    },
    limits.signUp,
  )
}

function authenticate(
  passport: Sessions['passport'],
  request: Request,
  response: Response,
): Promise<Express.User | false> {
  return new Promise((resolve, reject) => {
    const answer = (error: unknown, user?: Express.User | false): void => {
      if (error) reject(error instanceof Error ? error : new Error('sign-in failed', { cause: error }))
      else resolve(user ?? false)
    }
    const handler = passport.authenticate('local', answer) as (
      request: Request,
      response: Response,
      next: (error?: unknown) => void,
    ) => void
    handler(request, response, reject)
  })
}

/** passport makes a new session here, so an identifier planted before is worth nothing. */
function signIn(request: Request, user: Express.User): Promise<void> {
  return new Promise((resolve, reject) => {
    request.login(user, (error: unknown) => (error ? reject(error as Error) : resolve()))
  })
}

function endSession(request: Request): Promise<void> {
  return new Promise((resolve, reject) => {
    request.session.destroy((error: unknown) => (error ? reject(error as Error) : resolve()))
  })
}
