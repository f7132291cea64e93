import compression from 'compression'
import express, { type Express, Router } from 'express'
import { endpoints } from '#shared/api/index.ts'
import { AppError } from '#shared/errors.ts'
import type { Config } from './config.ts'
import { channelRoutes } from './features/channels/channel-routes.ts'
import { createChannelService } from './features/channels/channel-service.ts'
import { noteRoutes } from './features/note/note-routes.ts'
import { planRoutes } from './features/plan/plan-routes.ts'
import { projectRoutes } from './features/projects/project-routes.ts'
import { createProjectService } from './features/projects/project-service.ts'
import { sessionRoutes } from './features/session/session-routes.ts'
import { createSessionService } from './features/session/session-service.ts'
import type { Clock } from './lib/clock.ts'
import type { Db } from './lib/db.ts'
import type { Engine } from './lib/engine.ts'
import type { Handling } from './lib/handle.ts'
import type { Logger } from './lib/logger.ts'
import type { SessionStore } from './lib/session-store.ts'
import { errorHandler } from './middleware/error-handler.ts'
import { health } from './middleware/health.ts'
import { notFound } from './middleware/membership.ts'
import { pages } from './middleware/pages.ts'
import { createRateLimits, defaultRateLimits, type RateLimits } from './middleware/rate-limits.ts'
import { requestLog } from './middleware/request-log.ts'
import { securityHeaders } from './middleware/security-headers.ts'
import { createSessions } from './middleware/sessions.ts'

export interface Dependencies {
  config: Config
  db: Db
  store: SessionStore
  engine: Engine
  logger: Logger
  clock: Clock
  /** Folder of the built pages; null: the API alone. */
  pagesFolder: string | null
  limits?: RateLimits
  isStopping?: () => boolean
}

const largestBody = '256kb'

/** Puts the application together. Nothing is opened or started here. */
export function createApp(dependencies: Dependencies): Express {
  const { config, db, store, logger, pagesFolder } = dependencies
  const app = express()
  app.disable('x-powered-by')
  app.disable('etag')
  app.set('trust proxy', config.trustProxy)
  app.set('query parser', 'simple')
  app.use(requestLog(logger), securityHeaders(), compression())
  app.use(health(db, store, dependencies.isStopping ?? (() => false)))
  app.use('/api', (_, response, next) => {
    response.set('Cache-Control', 'no-store')
    next()
  })
  app.use('/api', express.json({ limit: largestBody, type: 'application/json' }))
  app.use(createApi(dependencies))
  app.use('/api', (request) => {
    throw wrongMethod(request.method, `${request.baseUrl}${request.path}`) ?? notFound()
  })
  if (pagesFolder) app.use(pages(pagesFolder))
  app.use(() => {
    throw notFound()
  })
  app.use(errorHandler(logger))
  return app
}

/** The routes of all resources. */
export function createApi({ config, db, store, engine, logger, clock, limits }: Dependencies): Router {
  const router = Router()
  const handling: Handling = { router, db, publicOrigin: config.publicOrigin }
  const rateLimits = createRateLimits(limits ?? defaultRateLimits)
  const sessions = createSessions(config, db, store)
  const channels = createChannelService(db, clock)
  router.use('/api', ...sessions.handlers)
  sessionRoutes(handling, {
    config,
    service: createSessionService(db, clock),
    passport: sessions.passport,
    limits: rateLimits,
    logger,
  })
  projectRoutes(handling, createProjectService(db, clock))
  channelRoutes(handling, channels)
  planRoutes(handling, engine, rateLimits.plan)
  noteRoutes(handling, { engine, channels, clock, limits: rateLimits.note })
  return router
}

/** 405 where the address exists and only the method does not. */
function wrongMethod(method: string, path: string): AppError | null {
  const methods = endpoints
    .filter((endpoint) => new RegExp(`^${endpoint.path.replace(/:[A-Za-z]+/g, '[^/]+')}$`).test(path))
    .map((endpoint) => endpoint.method)
  if (methods.length === 0) return null
  return new AppError('method_not_allowed', `${method} is not possible here; ${methods.join(', ')} would be.`)
}
