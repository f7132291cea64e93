import { useMemo, type ReactNode } from 'react'
import { usePreferences } from '#client/lib/preferences.ts'
import { describeSpread, layoutSpreadPlot } from '#shared/drawings/spread-plot.ts'
import type { Spread } from '#shared/studies/types.ts'
import { Drawing, Shapes } from './shape-view.tsx'
import { useWidth } from './use-width.ts'

interface SpreadFigureProps {
  spread: Spread
  unit: string
  /** Limit ± of the error, in the measurand's unit. */
  target: number | null
  /** The quantile table and what stands beside the drawing. */
  children: ReactNode
}

/** Histogram of the boards; the table beside it says the same. */
export function SpreadFigure({ spread, unit, target, children }: SpreadFigureProps) {
  const { decimalSign = '.' } = usePreferences()
  const [holder, width] = useWidth(280, 560, 560)
  const drawing = useMemo(
    () => layoutSpreadPlot(spread, { unit, target, decimalSign, width }),
    [spread, unit, target, decimalSign, width],
  )
  return (
    <figure className="d-figure" aria-label="Spread of the boards">
      <figcaption className="d-sentence">{describeSpread(spread, unit, decimalSign)}</figcaption>
      <div className="d-transfer">
        <div ref={holder} className="d-spread">
          <Drawing box={{ x: 0, y: 0, width: drawing.width, height: drawing.height }}>
            <Shapes shapes={drawing.shapes} />
          </Drawing>
        </div>
        {children}
      </div>
    </figure>
  )
}
