import { useEffect, useState, useSyncExternalStore } from 'react'
import { compareInWorker, type CompareProgress, type ComparedVariants } from '#client/lib/compare-client.ts'
import { PlanRefused } from '#client/lib/plan-client.ts'
import { keptVariant, type KeptVariant } from '../draft/kept-variant.ts'
import type { PlannerValue } from '../planner-context.tsx'
import { keptOwner } from './compare-href.ts'

export interface Compared {
  kept: KeptVariant | null
  /** The last result; of an earlier draft while the next is being computed. */
  found: ComparedVariants | null
  stale: boolean
  progress: CompareProgress | null
  failure: string | null
}

/** A pause in typing after which two variants are compared again, ms. */
const PAUSE = 300

/** The draft held against its kept variant, again after each change; nothing is computed while `wanted` is false. */
export function useCompared({ planning, where }: PlannerValue, wanted: boolean): Compared {
  const store = keptVariant(keptOwner(where))
  const kept = useSyncExternalStore(store.subscribe, store.get)
  const now = planning.planned?.document ?? null
  const [held, setHeld] = useState<{ kept: unknown; now: unknown; found: ComparedVariants } | null>(null)
  const [progress, setProgress] = useState<CompareProgress | null>(null)
  const [failure, setFailure] = useState<{ now: unknown; message: string } | null>(null)
  useEffect(() => {
    if (!wanted || !kept || !now) return
    const stop = new AbortController()
    const timer = setTimeout(() => {
      const request = { kept: kept.document, now: { ...now } }
      compareInWorker(request, { signal: stop.signal, onProgress: setProgress }).then(
        (found) => {
          setHeld({ kept, now, found })
          setProgress(null)
        },
        (error: unknown) => {
          if (!stop.signal.aborted) setFailure({ now, message: messageFor(error) })
        },
      )
    }, PAUSE)
    return () => {
      clearTimeout(timer)
      stop.abort()
    }
  }, [wanted, kept, now])
  const own = held !== null && held.kept === kept
  return {
    kept,
    found: own ? held.found : null,
    stale: own && held.now !== now,
    progress,
    failure: failure && failure.now === now ? failure.message : null,
  }
}

function messageFor(error: unknown): string {
  if (error instanceof PlanRefused)
    return 'The kept variant is not a whole design: keep one again once nothing is open.'
  return error instanceof Error ? error.message : String(error)
}
