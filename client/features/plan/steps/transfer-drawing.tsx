import { useMemo } from 'react'
import { TransferPlot } from '#client/components/drawings/transfer-plot.tsx'
import { transferOf } from '#shared/drawings/transfer-input.ts'
import { usePlanner } from '../planner-context.tsx'
import { DrawingBoundary } from './drawing-boundary.tsx'

/** The transfer plot of the chain. */
export function TransferDrawing() {
  const { candidate, planning } = usePlanner()
  const { planned } = planning
  const input = useMemo(
    () =>
      planned && candidate
        ? transferOf(candidate, planned.design.sensor.quantity, planned.design.converter)
        : null,
    [planned, candidate],
  )
  if (!input) return null
  return (
    <section aria-label="Transfer" className="plan-drawing">
      <DrawingBoundary what="The transfer plot">
        <TransferPlot input={input} />
      </DrawingBoundary>
    </section>
  )
}
