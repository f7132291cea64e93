import type { Ends, HeadroomEntry, Level, RoomState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { isFilterStage } from '#shared/filters/filter-spec.ts'
import type { Assessment, WatchedPin } from './assess.ts'

/** Excess below which a pin counts as at its limit, as a fraction of its region: nanovolts of bias are no fault. */
const TOUCH = 1e-5

const width = (allowed: Ends): number => allowed.high - allowed.low

/** Worst-case margins over the required span, V. */
export function spanMargin(pin: WatchedPin): Ends {
  return {
    low: Math.min(pin.margin.low.low, pin.margin.high.low),
    high: Math.min(pin.margin.low.high, pin.margin.high.high),
  }
}

/** Worst-case margins over everything that must stay linear: the span and the readings beyond it. */
export function wholeMargin(pin: WatchedPin): Ends {
  const all = Object.values(pin.margin)
  return { low: Math.min(...all.map((m) => m.low)), high: Math.min(...all.map((m) => m.high)) }
}

/**
 * State of a pin: over where the worst case leaves its region, over the span or beyond it; tight where the room over
 * the span is under `rules.room`. An input range that reaches the rail itself is not counted tight at that end.
 */
export function stateOf(pin: WatchedPin, rules: Design['rules']): RoomState {
  const region = width(pin.allowed)
  const whole = wholeMargin(pin)
  if (!(region > 0) || Math.min(whole.low, whole.high) < -TOUCH * region) return 'over'
  const span = spanMargin(pin)
  // The automatic guard lands on the rule itself; rounding must not turn that into a breach.
  const keep = (rules.room - 1e-6) * region
  const counts = (atRail: boolean) => !(pin.role === 'input' && atRail)
  const tight = (counts(pin.atRail.low) && span.low < keep) || (counts(pin.atRail.high) && span.high < keep)
  return tight ? 'tight' : 'clear'
}

export function toHeadroom(pin: WatchedPin, rules: Design['rules']): HeadroomEntry {
  const places = [pin.reached.low, pin.reached.high].filter((r) => r !== undefined)
  const nominal = [pin.nominalMargin.low, pin.nominalMargin.high]
  return {
    pin: pin.name,
    node: pin.node,
    stage: pin.stage,
    reached: {
      low: Math.min(...places.map((r) => r.low)),
      high: Math.max(...places.map((r) => r.high)),
    },
    allowed: pin.allowed,
    margin: spanMargin(pin),
    nominalMargin: {
      low: Math.min(...nominal.map((m) => m.low)),
      high: Math.min(...nominal.map((m) => m.high)),
    },
    clipsAt: pin.clipsAt,
    worstClipsAt: pin.worstClipsAt,
    state: stateOf(pin, rules),
  }
}

/** Levels of the diagram: one bay per node, its region the intersection of the pins that sit on it. */
export function toLevels(design: Design, assessment: Assessment): Level[] {
  const { pins, levels } = assessment
  return levels.map((level, index) => {
    const own = pinsAt(pins, level.node, assessment)
    const nominal = level.nominal
    const worst = {
      low: Math.min(level.bounds.low.low, level.bounds.high.low),
      high: Math.max(level.bounds.low.high, level.bounds.high.high),
    }
    const before = levels[index - 1]
    const gain = before ? (nominal.high - nominal.low) / (before.nominal.high - before.nominal.low) : null
    const base = { node: level.node, title: level.title, unit: 'V' as const, nominal, worst, gain }
    return level.node === 'sensor'
      ? { ...base, ...sensorRegion(design, pins, nominal) }
      : { ...base, ...nodeRegion(own, design) }
  })
}

function pinsAt(pins: WatchedPin[], node: string, assessment: Assessment): WatchedPin[] {
  const chain = assessment.chains.low
  const at = chain.levels.find((l) => l.node === node)?.p ?? node
  if (node === 'adc') return pins.filter((p) => p.role === 'converter')
  return pins.filter((p) => p.node === at && p.role !== 'converter')
}

type Region = Pick<
  Level,
  'region' | 'limitedBy' | 'room' | 'nominalRoom' | 'roomAt' | 'state' | 'clipsAt' | 'worstClipsAt'
>

function nodeRegion(pins: WatchedPin[], design: Design): Region {
  const first = pins[0]
  if (!first) throw new RangeError('a level needs a pin that limits it')
  const tightest = (end: 'low' | 'high') =>
    pins.reduce((a, b) => (spanMargin(b)[end] < spanMargin(a)[end] ? b : a), first)
  const lower = tightest('low')
  const upper = tightest('high')
  const region = {
    low: Math.max(...pins.map((p) => p.allowed.low)),
    high: Math.min(...pins.map((p) => p.allowed.high)),
  }
  const size = width(region) || Number.MIN_VALUE
  const states = pins.map((p) => stateOf(p, design.rules))
  const nominal = (pin: WatchedPin, end: 'low' | 'high') =>
    Math.min(pin.nominalMargin.low[end], pin.nominalMargin.high[end]) / size
  return {
    region,
    limitedBy: lower === upper ? lower.name : `${lower.name}, ${upper.name}`,
    room: { low: spanMargin(lower).low / size, high: spanMargin(upper).high / size },
    nominalRoom: { low: nominal(lower, 'low'), high: nominal(upper, 'high') },
    roomAt: { low: lower.name, high: upper.name },
    state: states.includes('over') ? 'over' : states.includes('tight') ? 'tight' : 'clear',
    clipsAt: clipBy(pins, 'clipsAt', design),
    worstClipsAt: clipBy(pins, 'worstClipsAt', design),
  }
}

/** Nearest clip of several pins at the lower and the upper limit. */
function clipBy(pins: WatchedPin[], which: 'clipsAt' | 'worstClipsAt', design: Design): Ends<number | null> {
  const middle = (design.sensor.quantity.low + design.sensor.quantity.high) / 2
  const nearest = (values: (number | null)[]): number | null =>
    values.reduce<number | null>(
      (best, q) =>
        q === null ? best : best === null || Math.abs(q - middle) < Math.abs(best - middle) ? q : best,
      null,
    )
  return { low: nearest(pins.map((p) => p[which].low)), high: nearest(pins.map((p) => p[which].high)) }
}

/**
 * The bay of the sensor: how far its output may go before a pin of the first stage clips. Where the inputs do not
 * limit it, the stage's own output does.
 */
function sensorRegion(design: Design, pins: WatchedPin[], nominal: Ends): Region {
  const { quantity } = design.sensor
  const perVolt = (quantity.high - quantity.low) / (nominal.high - nominal.low)
  const toVolts = (q: number) => nominal.low + (q - quantity.low) / perVolt
  const clips = (which: 'clipsAt' | 'worstClipsAt') => {
    const first = pins.filter((p) => p.stage === 'S1' || p.stage === 'level')
    const candidates = first.length > 0 ? first : pins
    const points = candidates.flatMap((p) =>
      [p[which].low, p[which].high].flatMap((q) =>
        q === null ? [] : [{ volts: toVolts(q), q, name: p.name }],
      ),
    )
    const middle = (nominal.low + nominal.high) / 2
    const below = points.filter((p) => p.volts <= middle).sort((a, b) => b.volts - a.volts)[0]
    const above = points.filter((p) => p.volts > middle).sort((a, b) => a.volts - b.volts)[0]
    return { below, above }
  }
  const ideal = clips('clipsAt')
  const worst = clips('worstClipsAt')
  const low = Math.min(nominal.low, nominal.high)
  const high = Math.max(nominal.low, nominal.high)
  // A side that nothing limits is drawn a span away.
  const far = high - low
  const region = { low: ideal.below?.volts ?? low - far, high: ideal.above?.volts ?? high + far }
  const size = width(region)
  const room = {
    low: (low - (worst.below?.volts ?? low - far)) / size,
    high: ((worst.above?.volts ?? high + far) - high) / size,
  }
  const least = Math.min(room.low, room.high)
  return {
    region,
    limitedBy:
      [ideal.below?.name, ideal.above?.name].filter(Boolean).join(', ') || 'nothing in the first stage',
    room,
    nominalRoom: { low: (low - region.low) / size, high: (region.high - high) / size },
    roomAt: { low: worst.below?.name ?? 'no limit', high: worst.above?.name ?? 'no limit' },
    state: least < -TOUCH ? 'over' : 'clear',
    clipsAt: { low: ideal.below?.q ?? null, high: ideal.above?.q ?? null },
    worstClipsAt: { low: worst.below?.q ?? null, high: worst.above?.q ?? null },
  }
}

/**
 * Volts by which each end of the target has to move inward so that output pins keep `keep` of their region over the
 * span, and stay inside it beyond the span. Pins at the converter, at the last stage's output and in the filter move
 * with it, or against it before a filter that inverts.
 */
export function guardDeficits(
  assessment: Assessment,
  keep: number,
): { low: number; high: number; beyond: Ends } {
  const signs = new Map(assessment.chains.low.following.map(({ node, sign }) => [node, sign]))
  const deficits = { low: -Infinity, high: -Infinity, beyond: { low: -Infinity, high: -Infinity } }
  for (const pin of assessment.pins) {
    const moves = pin.role === 'output' || isFilterStage(pin.stage) ? signs.get(pin.node) : undefined
    const sign = pin.role === 'converter' || pin.node === 'adc' ? 1 : moves
    if (sign === undefined) continue
    const size = width(pin.allowed)
    const whole = wholeMargin(pin)
    const span = spanMargin(pin)
    for (const end of ['low', 'high'] as const) {
      const own = sign === 1 ? end : end === 'low' ? 'high' : 'low'
      const room = pin.role === 'input' && pin.atRail[own] ? 0 : keep
      deficits[end] = Math.max(deficits[end], room * size - span[own])
      deficits.beyond[end] = Math.max(deficits.beyond[end], -whole[own])
    }
  }
  return deficits
}
