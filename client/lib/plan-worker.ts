import { buildNetworkFor, planDesign, prepareCandidate } from '#shared/design/plan-design.ts'
import { DesignRefused } from '#shared/design/read.ts'
import { computeCurves } from '#shared/studies/curves.ts'
import type { PlanAnswer, PlanRequest } from './plan-messages.ts'

/** Runs in a worker of its own: one question in, one answer out, nothing remembered between them but the last plan. */

let last: { document: string; plan: ReturnType<typeof planDesign> } | null = null

function planOf(document: unknown) {
  const text = JSON.stringify(document)
  if (last?.document !== text) last = { document: text, plan: planDesign(document) }
  return last.plan
}

function answer(request: PlanRequest): PlanAnswer {
  const { id } = request
  try {
    const plan = planOf(request.document)
    if (request.ask === 'plan') return { id, ok: true, plan }
    const candidate = plan.candidates[request.candidate]
    if (request.ask === 'curves') {
      const prepared = candidate ? prepareCandidate(request.document, candidate) : null
      return prepared
        ? { id, ok: true, curves: computeCurves(prepared.design, prepared.spec) }
        : { id, ok: false, message: 'There is no circuit to draw curves of for this arrangement.' }
    }
    const network = candidate ? buildNetworkFor(request.document, candidate) : null
    return network
      ? { id, ok: true, network }
      : { id, ok: false, message: 'There is no circuit to draw for this arrangement.' }
  } catch (error) {
    if (error instanceof DesignRefused) return { id, ok: false, faults: error.faults }
    return { id, ok: false, message: error instanceof Error ? error.message : 'The calculation failed.' }
  }
}

/** What is used of the worker's global scope; its full type would need another set of libraries than the page's. */
interface WorkerScope {
  onmessage: ((event: MessageEvent<PlanRequest>) => void) | null
  postMessage(message: PlanAnswer): void
}

const scope = globalThis as unknown as WorkerScope
scope.onmessage = (event) => scope.postMessage(answer(event.data))
