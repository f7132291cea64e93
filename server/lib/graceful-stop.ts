import type { Server } from 'node:http'
import { describeError, type Logger } from './logger.ts'

interface Stoppable {
  logger: Logger
  announceStop(): void
  close(): Promise<void>
}

const longestWait = 9_000

/**
 * Ends the process when it is told to: no new requests, those under way are finished and written, then out. A second
 * signal, or requests that never end, cut it short. An error that nobody caught ends it the same way, as a failure.
 */
export function stopOnSignal(server: Server, application: Stoppable): void {
  const { logger } = application
  let isStopping = false
  const stop = (reason: string, code: number): void => {
    if (isStopping) process.exit(1)
    isStopping = true
    logger.info('stopping', { reason })
    application.announceStop()
    // A kept-alive connection without a request would hold the server open for seconds.
    const idle = setInterval(() => server.closeIdleConnections(), 50)
    const cut = setTimeout(() => server.closeAllConnections(), longestWait)
    server.close(() => {
      clearInterval(idle)
      clearTimeout(cut)
      application.close().then(
        () => process.exit(code),
        (error: unknown) => {
          logger.error('close failed', describeError(error))
          process.exit(1)
        },
      )
    })
    server.closeIdleConnections()
  }
  for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stop(signal, 0))
  for (const kind of ['uncaughtException', 'unhandledRejection'] as const)
    process.on(kind, (error: unknown) => {
      logger.error('unexpected', describeError(error))
      stop(kind, 1)
    })
}
