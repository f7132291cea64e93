import type { RequestHandler } from 'express'
import helmet from 'helmet'

const directives = {
  defaultSrc: ["'none'"],
  scriptSrc: ["'self'"],
  styleSrc: ["'self'"],
  imgSrc: ["'self'", 'data:', 'blob:'],
  fontSrc: ["'self'"],
  connectSrc: ["'self'"],
  workerSrc: ["'self'"],
  manifestSrc: ["'self'"],
  formAction: ["'self'"],
  frameAncestors: ["'none'"],
  baseUri: ["'none'"],
  objectSrc: ["'none'"],
}

/** Headers of every answer: only this origin's own files, nothing inline, no frames. */
export function securityHeaders(): RequestHandler {
  return helmet({
    contentSecurityPolicy: { useDefaults: false, directives },
    crossOriginOpenerPolicy: { policy: 'same-origin' },
    crossOriginResourcePolicy: { policy: 'same-origin' },
    referrerPolicy: { policy: 'same-origin' },
    xFrameOptions: { action: 'deny' },
    strictTransportSecurity: { maxAge: 31_536_000, includeSubDomains: true },
  })
}

/**
 * The policy of one file, the worker that runs the simulator: a worker is governed by what its own script was sent
 * with. The simulator is WebAssembly that it fetches from a data: address of its own code; pages stay as strict as
 * they are.
 */
export const simulatorPolicy = [
  "default-src 'none'",
  "script-src 'self' 'wasm-unsafe-eval'",
  "connect-src 'self' data:",
  "base-uri 'none'",
  "frame-ancestors 'none'",
  "object-src 'none'",
].join(';')
