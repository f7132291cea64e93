import { useEffect, useRef, useState } from 'react'
import { runSpreadInWorker } from '#client/lib/spread-client.ts'
import type { Candidate } from '#shared/design/plan.ts'
import type { Spread } from '#shared/studies/types.ts'
import { usePlanner } from '../../planner-context.tsx'

export interface SpreadState {
  running: boolean
  /** What there is by now. */
  spread: Spread | null
  failure: string | null
  /** The design has changed since. */
  outdated: boolean
}

interface Run {
  document: unknown
  spread: Spread | null
  running: boolean
  failure: string | null
}

/** A run of boards: started and stopped by hand, stopped by itself as soon as the design changes. */
export function useSpread(candidate: Candidate): { state: SpreadState; run(): void; stop(): void } {
  const { planning, chosen, state: draft } = usePlanner()
  const [held, setHeld] = useState<Run | null>(null)
  const stopper = useRef<AbortController | null>(null)
  const planned = planning.planned
  const document = planned?.document ?? null

  // Figures of a design that is being changed are of no use to anybody: the run ends with the first edit.
  useEffect(() => () => stopper.current?.abort(), [draft.document])

  const run = () => {
    if (!planned || chosen === null) return
    stopper.current?.abort()
    const stop = new AbortController()
    stopper.current = stop
    const { boards, seed } = planned.design.analysis
    const update = (change: Partial<Run>) =>
      setHeld((run) => (run && stopper.current === stop ? { ...run, ...change } : run))
    setHeld({ document: planned.document, spread: null, running: true, failure: null })
    runSpreadInWorker(
      { document: planned.document, candidate: chosen, boards, seed },
      { signal: stop.signal, onProgress: (spread) => update({ spread }) },
    ).then(
      (spread) => update({ spread, running: false }),
      (error: unknown) => {
        // What was built before a stop is kept.
        if (stop.signal.aborted) update({ running: false })
        else update({ running: false, failure: error instanceof Error ? error.message : String(error) })
      },
    )
  }

  const known = held !== null && candidate.components !== undefined
  return {
    state: {
      running: known && held.running,
      spread: known ? held.spread : null,
      failure: known ? held.failure : null,
      outdated: known && held.document !== document,
    },
    run,
    stop: () => stopper.current?.abort(),
  }
}
