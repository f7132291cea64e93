import { domainOf, type CurvePlot } from '#shared/drawings/curve-plot.ts'

/**
 * Where a key moves the cursor on the common axis: Left and Right 1 % of its drawn length (fine 0.1 %), Home and End to
 * its ends, L to the next mark. Null where the key does nothing here.
 */
export function moveAcross(
  plot: CurvePlot,
  cursor: number | null,
  key: string,
  { fine, letters }: { fine: boolean; letters: boolean },
): number | null {
  const { low, high } = domainOf(plot)
  const log = plot.across.scale === 'log'
  const step = fine ? 0.001 : 0.01
  const moved = (share: number) => {
    const to = log ? (cursor ?? low) * (high / low) ** share : (cursor ?? low) + share * (high - low)
    // Repeated steps leave residues; four digits are more than a drawing shows.
    const tidy = Number(to.toPrecision(fine ? 5 : 4))
    return Math.min(high, Math.max(low, tidy === cursor ? to : tidy))
  }
  switch (key) {
    case 'ArrowRight':
      return cursor === null ? low : moved(step)
    case 'ArrowLeft':
      return cursor === null ? high : moved(-step)
    case 'Home':
      return low
    case 'End':
      return high
    case 'l':
    case 'L':
      return letters ? nextMark(plot, cursor ?? low) : null
    default:
      return null
  }
}

function nextMark({ marks }: CurvePlot, at: number): number | null {
  const places = marks.map(({ x }) => x).sort((a, b) => a - b)
  return places.find((x) => x > at) ?? places[0] ?? null
}
