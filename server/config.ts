import { randomBytes } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join, resolve } from 'node:path'
import { z } from 'zod'
import { findRoot } from './lib/root.ts'

/** Why the application does not start: one line a variable, never its value. */
export class ConfigError extends Error {
  readonly problems: string[]

  constructor(problems: string[]) {
    super(`The configuration is not usable:\n${problems.map((line) => `  ${line}`).join('\n')}`)
    this.name = 'ConfigError'
    this.problems = problems
  }
}

const wholeNumber = (low: number, high: number) =>
  z
    .string()
    .regex(/^\d{1,6}$/, `a whole number from ${low} to ${high}`)
    .transform(Number)
    .refine((value) => value >= low && value <= high, `a whole number from ${low} to ${high}`)

const onOff = z.enum(['on', 'off'], 'on or off')

const secretBytes = 32

const environmentSchema = z.object({
  NODE_ENV: z
    .enum(['development', 'test', 'production'], 'development, test or production')
    .default('development'),
  HOST: z
    .string()
    .regex(/^[A-Za-z0-9.:-]{1,255}$/, 'an address or host name')
    .default('127.0.0.1'),
  PORT: wholeNumber(0, 65535).default(4310),
  PUBLIC_ORIGIN: z
    .string()
    .regex(
      /^https?:\/\/[^/?#\s@]+$/,
      'scheme and host as people type it, without a path: https://plans.example.org',
    )
    .optional(),
  TRUST_PROXY: wholeNumber(0, 5).default(0),
  SESSION_SECRET: z
    .string()
    .refine((text) => Buffer.byteLength(text) >= secretBytes, `a secret of at least ${secretBytes} bytes`)
    .refine((text) => new Set(text).size >= 10, 'a random secret, not a repeated pattern')
    .optional(),
  SPANDREL_DATA: z.string().min(1, 'a folder').optional(),
  SPANDREL_DEMO: onOff.optional(),
  SPANDREL_SIGN_UP: z.enum(['open', 'closed'], 'open or closed').default('open'),
  LOG_LEVEL: z
    .enum(['debug', 'info', 'warn', 'error', 'silent'], 'debug, info, warn, error or silent')
    .default('info'),
})

export type Environment = Record<string, string | undefined>

export interface Config {
  mode: 'development' | 'test' | 'production'
  host: string
  port: number
  /** As people type it in the browser; null: whatever the request was sent to. */
  publicOrigin: string | null
  /** Served over https, so cookies are bound to it. */
  isSecure: boolean
  /** Proxies in front whose forwarded address is believed. */
  trustProxy: number
  sessionSecret: string
  databaseFile: string
  sessionFile: string
  isDemo: boolean
  isSignUpOpen: boolean
  logLevel: z.output<typeof environmentSchema>['LOG_LEVEL']
}

/** Outside production a secret is made once and kept, so that people stay signed in over a restart. */
function keptSecret(folder: string): string {
  const file = join(folder, 'session-secret')
  if (existsSync(file)) return readFileSync(file, 'utf8')
  const secret = randomBytes(secretBytes).toString('base64url')
  writeFileSync(file, secret, { mode: 0o600 })
  return secret
}

/** Reads the environment once, at start. Empty variables count as absent. Throws `ConfigError`. */
export function readConfig(environment: Environment): Config {
  const given = Object.fromEntries(Object.entries(environment).filter(([, value]) => value !== ''))
  const parsed = environmentSchema.safeParse(given)
  if (!parsed.success)
    throw new ConfigError(
      parsed.error.issues.map((issue) => `${issue.path.join('.')}: expected ${issue.message}.`),
    )
  const env = parsed.data
  const isProduction = env.NODE_ENV === 'production'
  const problems: string[] = []
  if (isProduction && !env.SESSION_SECRET)
    problems.push(`SESSION_SECRET: production needs a secret of at least ${secretBytes} bytes.`)
  if (isProduction && !env.PUBLIC_ORIGIN?.startsWith('https:'))
    problems.push(
      'PUBLIC_ORIGIN: production needs the https address that people type: https://plans.example.org.',
    )
  if (isProduction && env.SPANDREL_DEMO === 'on')
    problems.push('SPANDREL_DEMO: the demonstration has known passwords; it does not run in production.')
  if (problems.length > 0) throw new ConfigError(problems)

  const folder = resolve(findRoot(), env.SPANDREL_DATA ?? 'data')
  try {
    mkdirSync(folder, { recursive: true, mode: 0o700 })
  } catch {
    throw new ConfigError([
      'SPANDREL_DATA: the folder cannot be made; give one that this account can write to.',
    ])
  }
  return {
    mode: env.NODE_ENV,
    host: env.HOST,
    port: env.PORT,
    publicOrigin: env.PUBLIC_ORIGIN ?? null,
    isSecure: env.PUBLIC_ORIGIN?.startsWith('https:') ?? false,
    trustProxy: env.TRUST_PROXY,
    sessionSecret: env.SESSION_SECRET ?? keptSecret(folder),
    databaseFile: join(folder, 'spandrel.sqlite'),
    sessionFile: join(folder, 'sessions.sqlite'),
    isDemo: !isProduction && env.SPANDREL_DEMO !== 'off',
    isSignUpOpen: env.SPANDREL_SIGN_UP === 'open',
    logLevel: env.LOG_LEVEL,
  }
}
