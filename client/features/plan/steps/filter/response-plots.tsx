import { CurveFigure } from '#client/components/drawings/curve-figure.tsx'
import { usePreferences } from '#client/lib/preferences.ts'
import type { Dynamics, FilterPlan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { responsePlot, stepPlot } from '#shared/drawings/curve-inputs.ts'
import { CurvesPart } from '../curves-part.tsx'

interface ResponsePlotsProps {
  filter: FilterPlan
  dynamics: Dynamics | null
  design: Design
  lsb: number
}

/** Frequency response with its tolerance, and the step with its settling. */
export function ResponsePlots({ filter, dynamics, design, lsb }: ResponsePlotsProps) {
  const { decimalSign = '.' } = usePreferences()
  return (
    <section aria-label="Response" className="plan-drawing">
      <h2>Response</h2>
      <CurvesPart what="The response">
        {(curves) => (
          <div className="curve-pair">
            <CurveFigure
              title="Frequency response"
              caption="sensor to converter, through the network with real amplifiers; dashed is over the tolerance of the filter’s parts"
              named={responsePlot(curves.bode, {
                filter,
                bandwidth: design.sensor.bandwidth ?? null,
                decimalSign,
              })}
            />
            <CurveFigure
              title="Step over the whole span"
              caption="above in volts, below its distance from the final value"
              named={stepPlot(curves.step, {
                settling: dynamics?.settling ?? null,
                criterion: design.rules.settling,
                lsb,
                decimalSign,
              })}
            />
          </div>
        )}
      </CurvesPart>
    </section>
  )
}
