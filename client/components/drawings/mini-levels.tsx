import { memo, useMemo } from 'react'
import type { Level } from '#shared/design/plan.ts'
import { describeMiniLevels, layoutMiniLevels } from '#shared/drawings/mini-levels.ts'
import { Drawing, Shapes } from './shape-view.tsx'

/** The levels of a chain as small bays, for a row of a list; in words for those who do not see it. */
export const MiniLevels = memo(function MiniLevels({
  levels,
  rule,
}: {
  levels: readonly Level[]
  rule?: number
}) {
  const drawing = useMemo(
    () => layoutMiniLevels(levels, { worst: true, ...(rule === undefined ? {} : { rule }) }),
    [levels, rule],
  )
  return (
    <span className="d-mini">
      <Drawing box={{ x: 0, y: 0, width: drawing.width, height: drawing.height }}>
        <Shapes shapes={drawing.shapes} />
      </Drawing>
      <span className="d-hidden">{describeMiniLevels(levels)}</span>
    </span>
  )
})
