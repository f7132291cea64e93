import { join } from 'node:path'
import express, { Router } from 'express'

/**
 * The built pages. Files under `assets/` carry their hash in their name and never change; any other address without a
 * file extension is a page of the application, which finds its way by itself.
 */
export function pages(folder: string): Router {
  const router = Router()
  router.use(
    express.static(folder, {
      index: false,
      dotfiles: 'ignore',
      redirect: false,
      setHeaders(response, path) {
        const isHashed = path.startsWith(join(folder, 'assets'))
        response.set('Cache-Control', isHashed ? 'public, max-age=31536000, immutable' : 'no-cache')
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
