import engineUrl from 'eecircuit-engine?url'
import { planDesign, prepareCandidate } from '#shared/design/plan-design.ts'
import { DesignRefused } from '#shared/design/read.ts'
import { runCheck } from '#shared/studies/check.ts'
import { createSimulator, type SimulatorHost } from '#shared/studies/simulator.ts'
import type { IndependentCheck } from '#shared/design/plan.ts'
import type { CheckProgress, CheckRequest } from './check-client.ts'
import { serveJob } from './one-job.ts'

/*
 * Runs in a worker of its own, started for one check and ended after it: the simulator takes 330 MB. It is the only
 * place of the application that compiles WebAssembly; the server gives this file's answer a policy that allows it.
 */

type Tell = (progress: CheckProgress) => void

const quiet = (): void => undefined

const hostOf = (tell: Tell): SimulatorHost => ({
  async load() {
    await fetchWithProgress(engineUrl, tell)
    // Now in the browser's cache: an import by itself tells nothing of how far it is.
    const engine = (await import(/* @vite-ignore */ engineUrl)) as typeof import('eecircuit-engine')
    return engine.Simulation
  },
  quietly(work) {
    Object.assign(console, { log: quiet, info: quiet, warn: quiet, error: quiet })
    return work()
  },
  async within(work, milliseconds, late) {
    let timer = 0
    const limit = new Promise<never>((_, reject) => {
      timer = self.setTimeout(() => reject(late()), milliseconds)
    })
    try {
      return await Promise.race([work, limit])
    } finally {
      clearTimeout(timer)
    }
  },
})

async function fetchWithProgress(address: string, tell: Tell): Promise<void> {
  const response = await fetch(address)
  if (!response.ok || !response.body) throw new Error('The simulator could not be loaded from the server.')
  const { headers } = response
  // The length of what is sent says nothing of what comes out of it once it is unpacked.
  const length =
    headers.get('X-Unpacked-Length') ??
    (headers.has('Content-Encoding') ? null : headers.get('Content-Length'))
  const of = length === null ? null : Number(length)
  const reader = response.body.getReader()
  let done = 0
  let told = 0
  for (;;) {
    const part = await reader.read()
    if (part.done) break
    done += part.value.byteLength
    if (done - told < 500_000) continue
    told = done
    tell({ stage: 'loading', done, of })
  }
  tell({ stage: 'loading', done, of: done })
}

serveJob<CheckRequest, CheckProgress, IndependentCheck>(
  async ({ document, candidate }, tell) => {
    const chosen = planDesign(document).candidates[candidate]
    const prepared = chosen ? prepareCandidate(document, chosen) : null
    if (!prepared) throw new Error('There is no circuit to check for this arrangement.')
    return runCheck(prepared, createSimulator(hostOf(tell)), (done, of) => {
      if (done > 0) tell({ stage: 'running', done, of })
    })
  },
  (error) => (error instanceof DesignRefused ? error.faults : null),
)
