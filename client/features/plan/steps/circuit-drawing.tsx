import { useEffect, useState } from 'react'
import { Schematic } from '#client/components/drawings/schematic.tsx'
import { networkInWorker } from '#client/lib/plan-client.ts'
import type { Network } from '#shared/network/types.ts'
import { usePlanner } from '../planner-context.tsx'
import { leadToPart } from '../words/lead-to-part.ts'
import { DrawingBoundary } from './drawing-boundary.tsx'

/** The circuit of the chosen arrangement; each part leads to the field that sets it. */
export function CircuitDrawing() {
  const { candidate, goTo } = usePlanner()
  const network = useNetwork()
  if (!network) return null
  const lead = (ref: string) => goTo(leadToPart(ref, candidate?.components ?? []))
  return (
    <section aria-label="Circuit" className="plan-drawing">
      <h2>Circuit</h2>
      <DrawingBoundary what="The circuit">
        <Schematic network={network} onPart={lead} />
      </DrawingBoundary>
    </section>
  )
}

/** The network of the plan that is shown; the one before stays until the next is there. */
function useNetwork(): Network | null {
  const { planning, chosen, candidate } = usePlanner()
  const [network, setNetwork] = useState<Network | null>(null)
  const document = planning.planned?.document
  const drawn = candidate?.components !== undefined
  useEffect(() => {
    if (!document || chosen === null || !drawn) return
    const stop = new AbortController()
    networkInWorker(document, chosen, { signal: stop.signal }).then(setNetwork, () => {
      // Aborted, or there is no circuit to draw: the table of parts says the same.
    })
    return () => stop.abort()
  }, [document, chosen, drawn])
  return drawn ? network : null
}
