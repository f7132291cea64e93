import { randomUUID } from 'node:crypto'
import type { RequestHandler } from 'express'
import type { Logger } from '#server/lib/logger.ts'

/** Gives each request its id and writes one line when it is answered. The query is left out: it may hold anything. */
export function requestLog(logger: Logger): RequestHandler {
  return (request, response, next) => {
    const began = performance.now()
    request.requestId = randomUUID()
    response.set('X-Request-Id', request.requestId)
    response.on('close', () => {
      const params = request.params as Record<string, string | undefined>
      logger.info('request', {
        requestId: request.requestId,
        method: request.method,
        route: (request.route as { path?: string } | undefined)?.path ?? request.path.slice(0, 200),
        status: response.writableFinished ? response.statusCode : 499,
        milliseconds: Math.round((performance.now() - began) * 10) / 10,
        userId: request.user?.id,
        workspaceId: params.workspaceId?.slice(0, 40),
      })
    })
    next()
  }
}
