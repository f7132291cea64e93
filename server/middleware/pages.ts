import { existsSync, readdirSync, statSync } from 'node:fs'
import { basename, join } from 'node:path'
import express, { type RequestHandler, Router } from 'express'
import { simulatorPolicy } from './security-headers.ts'

const immutable = 'public, max-age=31536000, immutable'

/**
 * The built pages. Files under `assets/` carry their hash in their name and never change; any other address without a
 * file extension is a page of the application, which finds its way by itself.
 */
export function pages(folder: string): Router {
  const router = Router()
  router.use('/assets', packed(join(folder, 'assets')))
  router.use(
    express.static(folder, {
      index: false,
      dotfiles: 'ignore',
      redirect: false,
      setHeaders(response, path) {
        const isHashed = path.startsWith(join(folder, 'assets'))
        response.set('Cache-Control', isHashed ? immutable : 'no-cache')
        if (isHashed && basename(path).startsWith('check-worker-'))
          response.set('Content-Security-Policy', simulatorPolicy)
      },
    }),
  )
  router.get('/{*path}', (request, response, next) => {
    const last = request.path.split('/').at(-1) ?? ''
    if (last.includes('.') || request.path.includes('/.')) return next()
    response.set('Cache-Control', 'no-cache')
    response.sendFile('index.html', { root: folder, cacheControl: false })
  })
  return router
}

/** Kinds of packing that the build leaves beside its largest files, the smaller first. */
const packings = { br: '.br', gzip: '.gz' } as const

/** Sends the largest files as the build packed them: packing 20 MB at each request would take seconds. */
function packed(folder: string): RequestHandler {
  const names = new Set(
    (existsSync(folder) ? readdirSync(folder) : [])
      .filter((name) => name.endsWith(packings.br))
      .map((name) => name.slice(0, -packings.br.length)),
  )
  return (request, response, next) => {
    const name = request.path.slice(1)
    // Asked one by one: browsers list gzip first and mean nothing by it.
    const encoding = (['br', 'gzip'] as const).find((name) => request.acceptsEncodings(name))
    if (request.method !== 'GET' || !names.has(name) || !encoding) return next()
    response.type(name)
    response.set({
      'Cache-Control': immutable,
      'Content-Encoding': encoding,
      // What comes out of it, for whoever shows how far the loading is.
      'X-Unpacked-Length': String(statSync(join(folder, name)).size),
      Vary: 'Accept-Encoding',
    })
    response.sendFile(`${name}${packings[encoding]}`, {
      root: folder,
      cacheControl: false,
      acceptRanges: false,
    })
  }
}
