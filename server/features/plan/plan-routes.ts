import type { RequestHandler } from 'express'
import { planApi } from '#shared/api/plan.ts'
import type { Engine } from '#server/lib/engine.ts'
import { type Handling, handlePublic } from '#server/lib/handle.ts'

export function planRoutes(handling: Handling, engine: Engine, limits: RequestHandler[]): void {
  handlePublic(
    handling,
    planApi.create,
    ({ body, query }) => {
      const document = engine.read(body)
      return query.check === 'true' ? engine.checkedPlan(document) : engine.plan(document)
    },
    limits,
  )
}
