export type LogLevel = 'debug' | 'info' | 'warn' | 'error' | 'silent'

const rank: Record<LogLevel, number> = { debug: 0, info: 1, warn: 2, error: 3, silent: 4 }

/** Plain values only: whoever logs chooses each of them. Bodies, cookies and headers are never passed. */
export type LogFields = Record<string, string | number | boolean | null | undefined>

export interface Logger {
  debug(event: string, fields?: LogFields): void
  info(event: string, fields?: LogFields): void
  warn(event: string, fields?: LogFields): void
  error(event: string, fields?: LogFields): void
}

/** One JSON object per line; JSON's own escaping keeps line breaks and terminal codes inside the line. */
export function createLogger(level: LogLevel, write: (line: string) => void): Logger {
  const log =
    (name: Exclude<LogLevel, 'silent'>) =>
    (event: string, fields: LogFields = {}): void => {
      if (rank[name] < rank[level]) return
      write(`${JSON.stringify({ time: new Date().toISOString(), level: name, event, ...fields })}\n`)
    }
  return { debug: log('debug'), info: log('info'), warn: log('warn'), error: log('error') }
}

/** An unexpected error for the log: its kind, text and stack, and the same of its causes. */
export function describeError(error: unknown): LogFields {
  if (!(error instanceof Error)) return { error: String(error) }
  const causes: string[] = []
  let cause: unknown = error.cause
  while (cause instanceof Error && causes.length < 5) {
    causes.push(`${cause.name}: ${cause.message}`)
    cause = cause.cause
  }
  return {
    error: `${error.name}: ${error.message}`,
    stack: error.stack,
    cause: causes.length > 0 ? causes.join(' ← ') : undefined,
  }
}
