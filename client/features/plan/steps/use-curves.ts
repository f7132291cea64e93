import { useCallback, useEffect, useState } from 'react'
import { curvesInWorker } from '#client/lib/plan-client.ts'
import type { Curves } from '#shared/studies/types.ts'
import { usePlanner } from '../planner-context.tsx'

/** True from when an element first comes near the window. */
export function useSeen(): [(node: HTMLElement | null) => (() => void) | undefined, boolean] {
  const [seen, setSeen] = useState(false)
  const hold = useCallback((node: HTMLElement | null) => {
    if (!node) return undefined
    const watch = new IntersectionObserver((entries) => {
      if (!entries.some((entry) => entry.isIntersecting)) return
      setSeen(true)
      watch.disconnect()
    })
    watch.observe(node)
    return () => watch.disconnect()
  }, [])
  return [hold, seen]
}

export type CurveState =
  | { kind: 'awaited' }
  | { kind: 'failed'; message: string }
  | { kind: 'ready'; curves: Curves; stale: boolean }

/**
 * Curves of the plan that is shown, asked for only while somebody looks at them; those of the plan before stay until the
 * next are there.
 */
export function useCurves(wanted: boolean): CurveState {
  const { planning, chosen, candidate } = usePlanner()
  const [found, setFound] = useState<{ document: unknown; curves: Curves } | null>(null)
  const [failure, setFailure] = useState<{ document: unknown; message: string } | null>(null)
  const document = planning.planned?.document
  const drawn = candidate?.components !== undefined
  useEffect(() => {
    if (!wanted || !document || chosen === null || !drawn) return
    const stop = new AbortController()
    curvesInWorker(document, chosen, { signal: stop.signal }).then(
      (curves) => setFound({ document, curves }),
      (error: unknown) => {
        if (stop.signal.aborted) return
        setFailure({ document, message: error instanceof Error ? error.message : String(error) })
      },
    )
    return () => stop.abort()
  }, [wanted, document, chosen, drawn])
  if (failure && failure.document === document) return { kind: 'failed', message: failure.message }
  return found && drawn
    ? { kind: 'ready', curves: found.curves, stale: found.document !== document }
    : { kind: 'awaited' }
}
