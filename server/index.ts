import type { AddressInfo } from 'node:net'
import { openApplication } from './application.ts'
import { ConfigError } from './config.ts'
import { welcome } from './demo/welcome.ts'
import { stopOnSignal } from './lib/graceful-stop.ts'
import { describeError } from './lib/logger.ts'

async function start(): Promise<void> {
  const application = await openApplication(process.env)
  const { app, config, logger } = application
  const server = app.listen(config.port, config.host, (error) => {
    if (error) {
      const isTaken = (error as NodeJS.ErrnoException).code === 'EADDRINUSE'
      process.stderr.write(
        isTaken
          ? `PORT: ${config.port} is in use already. Stop the other program, or choose another: PORT=4311 npm start\n`
          : `HOST, PORT: cannot listen on ${config.host}:${config.port} (${error.message}).\n`,
      )
      process.exit(1)
    }
    const { port } = server.address() as AddressInfo
    const host = config.host.includes(':') ? `[${config.host}]` : config.host
    const address = config.publicOrigin ?? `http://${host}:${port}`
    if (config.mode !== 'production') process.stdout.write(welcome(address, config.isDemo))
    logger.info('listening', { address, port, mode: config.mode, demo: config.isDemo })
  })
  server.requestTimeout = 60_000
  server.headersTimeout = 15_000
  stopOnSignal(server, application)
}

start().catch((error: unknown) => {
  if (error instanceof ConfigError) process.stderr.write(`${error.message}\n`)
  else
    process.stderr.write(
      `${JSON.stringify({ level: 'error', event: 'not started', ...describeError(error) })}\n`,
    )
  process.exit(1)
})
