import type { Arrangement, Need } from '#shared/amplifiers/define.ts'
import { assess, type AssessDepth, type Assessment } from '#shared/budget/assess.ts'
import { guardDeficits, stateOf } from '#shared/budget/headroom.ts'
import { toLoads } from '#shared/budget/loads.ts'
import { beforeFilter, sectionValues, type FilterSpec } from '#shared/filters/filter-spec.ts'
import { CircuitError } from '#shared/network/circuit-error.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { ChainSpec, StageChoice } from './chain.ts'
import { filterOf } from './filter-of.ts'
import { clipReason, loadReason, stressReasons } from './findings.ts'
import type { Ends, Reason } from './plan.ts'
import { requirementOf } from './requirement.ts'
import type { Design } from './schema.ts'
import type { SizedStage } from './size-stage.ts'

/** One way to build the whole chain, carried as far as it goes. */
export interface Trial {
  id: string
  title: string
  stages: { ref: 'S1' | 'S2'; arrangement: Arrangement; sized: SizedStage; need: Need }[]
  spec: ChainSpec
  assessment: Assessment
  guard: Ends
  target: Ends
  /** Share of the signal that the converter's input resistance leaves. */
  loading: number
  /** Reasons against it; empty when it is feasible. */
  reasons: Reason[]
}

export type TrialResult =
  { ok: true; trial: Trial } | { ok: false; id: string; title: string; reasons: Reason[] }

/** Guard bands that the plan chooses are whole multiples of this fraction of the range, so that figures stay round. */
const GUARD_STEP = 0.0005
const MOST_ROUNDS = 9

/**
 * Target of the chain: the converter's range less guard bands, shrunk so that readings beyond the span fit as well.
 * `crossed`: the low end of the measurand lands at the top, as in an inverting chain.
 */
export function targetFor(
  design: Design,
  guard: Ends,
  inset: Ends,
  signal: Ends,
  beyond: Ends | null,
  crossed = false,
): Ends {
  const { low, high } = design.converter.input
  const range = high - low
  const g0 = low + guard.low * range
  const g1 = high - guard.high * range
  if (!beyond) return { low: g0, high: g1 }
  // Shares of the span by which the readings beyond it exceed it at either end.
  const span = signal.high - signal.low
  const past = { low: (signal.low - beyond.low) / span, high: (beyond.high - signal.high) / span }
  const [below, above] = crossed ? [past.high, past.low] : [past.low, past.high]
  const r0 = low + inset.low
  const r1 = high - inset.high
  const size = Math.min(
    g1 - g0,
    (r1 - g0) / (1 + above),
    (g1 - r0) / (1 + below),
    (r1 - r0) / (1 + below + above),
  )
  const least = Math.max(g0, r0 + below * size)
  const most = Math.min(g1, r1 - above * size) - size
  const start = (least + most) / 2
  return { low: start, high: start + size }
}

export interface GuardPolicy {
  /** Room to keep at the output, as a fraction of each region; null: the guard is given and stays. */
  keep: number | null
  start: Ends
}

/**
 * Guard policies in the order in which they are tried: what the design states; or the smallest guard with which the
 * worst board keeps the room of the rule; or, where that shuts an arrangement out, the smallest that keeps it inside.
 */
export function guardPolicies(design: Design): GuardPolicy[] {
  const given = design.converter.guard
  if (given) return [{ keep: null, start: given }]
  const room = design.rules.room
  return [
    { keep: room, start: { low: room, high: room } },
    { keep: 0, start: { low: 0, high: 0 } },
  ]
}

export type SizeChain = (
  target: Ends,
) => { ok: true; stages: Trial['stages'] } | { ok: false; reasons: Reason[] }

/** Sizes and assesses a chain, moving its target inward until the worst board fits. */
export function settleChain(
  design: Design,
  id: string,
  title: string,
  size: SizeChain,
  depth: AssessDepth = 'every-board',
): TrialResult {
  let outcome: TrialResult | null = null
  for (const policy of guardPolicies(design)) {
    const result = settleWith(design, id, title, size, policy, depth)
    if (result.ok && result.trial.reasons.length === 0) return result
    // The later policy asks for less: its reasons are the ones that really forbid the arrangement.
    if (!outcome || result.ok || !outcome.ok) outcome = result
  }
  if (!outcome) throw new RangeError('there is always at least one guard policy')
  return outcome
}

/**
 * Moves the target inward until the board that is looked at fits: first the nominal one, since what fails there is not
 * worth the vertices of every board, then every board. Of the trials at full depth the best is kept.
 */
export function settleWith(
  design: Design,
  id: string,
  title: string,
  size: SizeChain,
  policy: GuardPolicy,
  depth: AssessDepth,
): TrialResult {
  const { signal, beyond } = requirementOf(design)
  const range = design.converter.input.high - design.converter.input.low
  const filter = filterOf(design)
  if (filter.refusals.length > 0) return { ok: false, id, title, reasons: filter.refusals }
  const loading = loadingOf(design, filter)
  const turnsOver = filter.dc.gain < 0
  let guard = policy.start
  let inset = { low: 0, high: 0 }
  let crossed = false
  let best: { trial: Trial; missing: number } | null = null
  const depths: AssessDepth[] = depth === 'nominal' ? ['nominal'] : ['nominal', depth]
  for (const looking of depths) {
    best = null
    for (let round = 0; round < MOST_ROUNDS; round++) {
      const target = targetFor(design, guard, inset, signal, beyond, crossed)
      const sized = target.high > target.low ? size(before(filter, target, loading)) : null
      if (!sized) break
      if (!sized.ok) {
        if (!best) return { ok: false, id, title, reasons: sized.reasons }
        break
      }
      const loss = sourceLoss(sized.stages, filter)
      if (loss) return { ok: false, id, title, reasons: [loss] }
      const landing = sized.stages.at(-1)?.sized.sizing.target
      if (beyond && landing && (landing.low > landing.high !== turnsOver) !== crossed) {
        // An inverting chain gives the readings beyond the low end at the top: its shares change places.
        crossed = !crossed
        continue
      }
      const trial = assessTrial(design, { id, title, stages: sized.stages, guard, target, loading }, looking)
      if (!('spec' in trial)) return { ok: false, id, title, reasons: trial.reasons }
      const deficits = guardDeficits(trial.assessment, policy.keep ?? 0)
      const atGuard = policy.keep === null ? 0 : Math.max(0, deficits.low) + Math.max(0, deficits.high)
      const atInset = beyond ? Math.max(0, deficits.beyond.low) + Math.max(0, deficits.beyond.high) : 0
      // Reasons weigh more than any shortfall: what fits comes before what nearly fits.
      const missing = atGuard + atInset + 1e6 * trial.reasons.length
      if (!best || missing < best.missing) best = { trial, missing }
      if (Math.max(atGuard, atInset) <= 1e-9 * range) break
      // Standard values come in steps that the exact amount would chase: each round asks for a little more.
      const more = (deficit: number) => (deficit > 0 ? deficit * (1 + round / 4) + (round * range) / 5000 : 0)
      if (policy.keep !== null)
        guard = {
          low: stepUp(guard.low + more(deficits.low) / range),
          high: stepUp(guard.high + more(deficits.high) / range),
        }
      if (beyond)
        inset = { low: inset.low + more(deficits.beyond.low), high: inset.high + more(deficits.beyond.high) }
      if (guard.low + guard.high >= 0.98) break
    }
    if (looking === 'nominal' && best && best.trial.reasons.length > 0) break
  }
  if (best) return { ok: true, trial: best.trial }
  return {
    ok: false,
    id,
    title,
    reasons: [
      {
        code: 'no-target',
        text: 'The guard bands and the readings beyond the span leave nothing of the converter range.',
        numbers: {},
      },
    ],
  }
}

/** Gain that a source without a stage behind it may lose to a filter section that loads it, fraction. */
const MOST_LOSS = 1e-3

/** Why a source that feeds an inverting section itself cannot: its resistance stands in series with the gain. */
function sourceLoss(stages: Trial['stages'], { sections }: FilterSpec): Reason | null {
  const [first] = sections
  const source = stages[0]?.need.sourceResistance ?? 0
  if (!first || stages.some((s) => s.arrangement.amplifiers > 0)) return null
  const { R1, R3 } = sectionValues(first)
  const loss = source / (source + R1)
  if (R3 === undefined || loss <= MOST_LOSS) return null
  const ohms = (r: number) => formatQuantity(r, 'Ω', { digits: 3 })
  return {
    code: 'filter-loads-source',
    text: `The first section of the filter, ${ohms(R1)}, would load the ${ohms(source)} of the source: take the follower before it, or sallen-key sections.`,
    numbers: { loss, source, input: R1 },
  }
}

/** What the converter's input resistance leaves of the signal behind the filter's resistor, as a ratio of at most 1. */
function loadingOf({ converter: { inputResistance } }: Design, { drive }: FilterSpec): number {
  return inputResistance / (inputResistance + drive.resistance)
}

/**
 * Where the last stage has to land: higher by what the converter's input resistance takes away, and turned over where
 * the filter inverts.
 */
function before(filter: FilterSpec, target: Ends, loading: number): Ends {
  const ends = [target.low, target.high].map((volts) => beforeFilter(filter, volts / loading))
  return { low: Math.min(...ends), high: Math.max(...ends) }
}

const stepUp = (fraction: number): number => Math.ceil(fraction / GUARD_STEP - 1e-9) * GUARD_STEP

type TrialParts = Pick<Trial, 'id' | 'title' | 'stages' | 'guard' | 'target' | 'loading'>

function assessTrial(design: Design, parts: TrialParts, depth: AssessDepth): Trial | { reasons: Reason[] } {
  const spec: ChainSpec = {
    filter: filterOf(design),
    stages: parts.stages.map((s): StageChoice => ({
      ref: s.ref,
      arrangement: s.arrangement,
      sizing: s.sized.sizing,
      need: s.need,
      values: s.sized.values,
    })),
  }
  let assessment: Assessment
  try {
    assessment = assess(design, spec, depth)
  } catch (error) {
    // A network that has no single answer is a finding about this arrangement, in circuit terms.
    if (!(error instanceof CircuitError)) throw error
    return { reasons: [{ code: 'circuit', text: error.message, numbers: {} }] }
  }
  return { ...parts, spec, assessment, reasons: reasonsAgainst(design, assessment) }
}

/** What speaks against a chain once it is assessed; empty when it is feasible. */
export function reasonsAgainst(design: Design, assessment: Assessment): Reason[] {
  const reasons = assessment.pins
    .filter((pin) => stateOf(pin, design.rules) === 'over')
    .map((pin) => clipReason(design, pin))
  for (const load of toLoads(assessment)) if (load.state === 'over') reasons.push(loadReason(load))
  for (const stress of assessment.stresses) reasons.push(...stressReasons(stress))
  if (!assessment.bound.keepsSign)
    reasons.push({
      code: 'pole-in-box',
      text: 'Within its tolerances the network passes through a point where it has no stable answer: take closer resistors or another arrangement.',
      numbers: {},
    })
  return reasons
}
