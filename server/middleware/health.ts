import { Router } from 'express'
import type { Db } from '#server/lib/db.ts'
import type { SessionStore } from '#server/lib/session-store.ts'

/** `/healthz`: the process runs. `/readyz`: it can also do its work, and is not about to stop. */
export function health(db: Db, store: SessionStore, isStopping: () => boolean): Router {
  const router = Router()
  router.use((_, response, next) => {
    response.set('Cache-Control', 'no-store')
    next()
  })
  router.get('/healthz', (_, response) => {
    response.json({ status: 'ok' })
  })
  router.get('/readyz', async (_, response) => {
    const isReady = !isStopping() && (await canAnswer(db, store))
    response.status(isReady ? 200 : 503).json({ status: isReady ? 'ready' : 'not ready' })
  })
  return router
}

async function canAnswer(db: Db, store: SessionStore): Promise<boolean> {
  try {
    await db.check()
    store.check()
    return true
  } catch {
    return false
  }
}
