import type { Ends, Level } from '#shared/design/plan.ts'
import { isKnown, reachOf } from './level-figures.ts'

/** Sizes of a level diagram, px. */
export interface LevelMeasures {
  /** From one bay to the next. */
  column: number
  bay: number
  /** Height of the linear region, and of the cut stone above and below it. */
  region: number
  poche: number
  /** Room for the key at the left; 0: no key. */
  gutter: number
  /** Room for the limit figures at the left of each bay. */
  limits: number
  /** Upper edge of the bays. */
  top: number
  /** Factor on type sizes. */
  text: number
  /** Whether limit figures carry their unit; it always stands at the levels. */
  limitUnits: boolean
}

/** For the page at 1440 px. */
export const sheetMeasures: LevelMeasures = {
  column: 202,
  bay: 92,
  region: 172,
  poche: 24,
  gutter: 118,
  limits: 48,
  top: 49,
  text: 1,
  limitUnits: true,
}

/** For a text block of 668 px (176.7 mm) with `bays` bays; nothing under 7 pt. */
export function noteMeasures(bays: number, width = 668): LevelMeasures {
  const column = width / Math.max(bays, 4)
  return {
    column,
    bay: Math.min(64, column * 0.42),
    region: 108,
    poche: 16,
    gutter: 0,
    limits: 38,
    top: 40,
    text: 0.86,
    limitUnits: false,
  }
}

/** Height on the page of a voltage at one bay, and the edges of its linear region. */
export interface BayScale {
  /** Not held at the edges. */
  y(volts: number): number
  upper: number
  lower: number
  outer: Ends
  /** Voltages are drawn multiplied by this power of ten. */
  times: number
}

/** y = top + height·(1 − (v − L)/(U − L)) with L and U the region of the node: each bay on its own scale. */
export function shareScale(level: Level, measures: LevelMeasures): BayScale {
  const upper = measures.top + measures.poche
  return scaleOver(level.region, level, { upper, lower: upper + measures.region }, measures, 1)
}

/** One scale in volts for all bays; the first is multiplied by the power of ten that makes it visible. */
export function voltScales(levels: readonly Level[], measures: LevelMeasures): BayScale[] {
  const known = levels.filter(isKnown)
  const span = (level: Level): Ends => {
    const reach = reachOf(level, true)
    return { low: Math.min(level.region.low, reach.low), high: Math.max(level.region.high, reach.high) }
  }
  const [first] = levels
  const largest = (ends: Ends) => Math.max(Math.abs(ends.low), Math.abs(ends.high))
  const rest = known.filter((level) => level !== first)
  const spans = (rest.length > 0 ? rest : known).map(span)
  const all = { low: Math.min(...spans.map((s) => s.low)), high: Math.max(...spans.map((s) => s.high)) }
  let times = 1
  if (first && isKnown(first) && rest.length > 0) {
    const ratio = largest(all) / largest(span(first))
    times = ratio >= 10 ? 10 ** Math.floor(Math.log10(ratio)) : 1
    const own = span(first)
    all.low = Math.min(all.low, own.low * times)
    all.high = Math.max(all.high, own.high * times)
  }
  const top = measures.top + measures.poche
  const frame = { upper: top, lower: top + measures.region }
  return levels.map((level) => scaleOver(all, level, frame, measures, level === first ? times : 1))
}

function scaleOver(
  range: Ends,
  level: Level,
  frame: { upper: number; lower: number },
  measures: LevelMeasures,
  times: number,
): BayScale {
  const span = range.high - range.low
  // A region without width has its one voltage in the middle.
  const y = (volts: number) =>
    span > 0
      ? frame.lower - ((frame.lower - frame.upper) * (volts * times - range.low)) / span
      : (frame.lower + frame.upper) / 2 - Math.sign(volts * times - range.low) * measures.region
  return {
    y,
    upper: y(level.region.high),
    lower: y(level.region.low),
    outer: { low: frame.upper - measures.poche, high: frame.lower + measures.poche },
    times,
  }
}

/** Levels are held this far inside the outer edge, with a break mark. */
export const HOLD = 3

/** Held inside the outer edge of the bay; tells whether it had to be. */
export function held(scale: BayScale, volts: number): { y: number; cut: boolean } {
  const wanted = scale.y(volts)
  const y = Math.min(scale.outer.high - HOLD, Math.max(scale.outer.low + HOLD, wanted))
  return { y, cut: Math.abs(y - wanted) > 0.5 }
}
