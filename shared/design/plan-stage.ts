import { arrangements } from '#shared/amplifiers/index.ts'
import type { Arrangement, Need } from '#shared/amplifiers/define.ts'
import { formRefs } from '#shared/amplifiers/picker/index.ts'
import { oriented } from '#shared/amplifiers/place.ts'
import { assess, type AssessDepth, type Assessment } from '#shared/budget/assess.ts'
import { guardDeficits, stateOf } from '#shared/budget/headroom.ts'
import { toLoads } from '#shared/budget/loads.ts'
import { sizeFilter } from '#shared/filters/rc.ts'
import { kindOf } from '#shared/sensors/index.ts'
import { CircuitError } from '#shared/network/circuit-error.ts'
import { askedArrangement } from './asked.ts'
import { sensorContext, type ChainSpec, type StageChoice } from './chain.ts'
import { clipReason, loadReason } from './findings.ts'
import type { Ends, Reason } from './plan.ts'
import { resolveReferences } from './references.ts'
import type { Design } from './schema.ts'
import { sizeStage, type SizedStage } from './size-stage.ts'

/** One way to build the whole chain, carried as far as it goes. */
export interface Trial {
  id: string
  title: string
  stages: { ref: 'S1' | 'S2'; arrangement: Arrangement; sized: SizedStage; need: Need }[]
  spec: ChainSpec
  assessment: Assessment
  guard: Ends
  target: Ends
  /** Reasons against it; empty when it is feasible. */
  reasons: Reason[]
}

export type TrialResult =
  { ok: true; trial: Trial } | { ok: false; id: string; title: string; reasons: Reason[] }

/** What is asked of the chain as a whole, before any arrangement is looked at. */
export interface Requirement {
  signal: Ends
  need: Omit<Need, 'target'>
}

export function requirementOf(design: Design): Requirement {
  const signal = kindOf(design.sensor).signal(design.sensor, sensorContext(design))
  const { shift } = resolveReferences(design)
  return {
    signal: signal.ends,
    need: {
      signal: signal.ends,
      differential: signal.differential,
      commonMode: signal.commonMode,
      sourceResistance: signal.sourceResistance,
      floating: signal.floating,
      reference: shift && { voltage: shift.voltage, resistance: shift.resistance },
      rails: { positive: design.rails.positive, negative: design.rails.negative },
      parts: design.parts,
      level: design.choose.stages?.find((s) => s.ref === 'S1')?.reference ?? null,
    },
  }
}

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

interface GuardPolicy {
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

type SizeChain = (target: Ends) => { ok: true; stages: Trial['stages'] } | { ok: false; reasons: Reason[] }

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

function settleWith(
  design: Design,
  id: string,
  title: string,
  size: SizeChain,
  policy: GuardPolicy,
  depth: AssessDepth,
): TrialResult {
  const { signal } = requirementOf(design)
  const beyond = kindOf(design.sensor).signal(design.sensor, sensorContext(design)).beyond
  const range = design.converter.input.high - design.converter.input.low
  let guard = policy.start
  let inset = { low: 0, high: 0 }
  let last: Trial | null = null
  let crossed = false
  // What fails on the nominal board is not worth the vertices of every board.
  let looking: AssessDepth = 'nominal'
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const target = targetFor(design, guard, inset, signal, beyond, crossed)
    if (!(target.high > target.low)) break
    const sized = size(target)
    if (!sized.ok) {
      if (!last) return { ok: false, id, title, reasons: sized.reasons }
      break
    }
    const landing = sized.stages.at(-1)?.sized.sizing.target
    if (beyond && landing && landing.low > landing.high !== crossed) {
      // An inverting chain gives the readings beyond the low end at the top: its shares change places.
      crossed = !crossed
      continue
    }
    const trial = assessTrial(design, { id, title, stages: sized.stages, guard, target }, looking)
    if (!('spec' in trial)) return { ok: false, id, title, reasons: trial.reasons }
    last = trial
    const deficits = guardDeficits(trial.assessment, policy.keep ?? 0)
    const moveInset = beyond !== null && Math.max(deficits.beyond.low, deficits.beyond.high) > 1e-9 * range
    const moveGuard = policy.keep !== null && Math.max(deficits.low, deficits.high) > 1e-9 * range
    if (!moveInset && !moveGuard) {
      if (looking === depth || trial.reasons.length > 0) break
      looking = depth
      continue
    }
    if (moveGuard)
      guard = {
        low: stepUp(guard.low + Math.max(0, deficits.low) / range),
        high: stepUp(guard.high + Math.max(0, deficits.high) / range),
      }
    if (moveInset)
      inset = {
        low: inset.low + moveBy(deficits.beyond.low, range),
        high: inset.high + moveBy(deficits.beyond.high, range),
      }
    if (guard.low + guard.high >= 0.98) break
  }
  return last
    ? { ok: true, trial: last }
    : {
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

/** A little more than what is missing: standard values come in steps, and the exact amount would chase them. */
const moveBy = (deficit: number, range: number): number => (deficit > 0 ? 1.5 * deficit + 1e-4 * range : 0)

const stepUp = (fraction: number): number => Math.ceil(fraction / GUARD_STEP - 1e-9) * GUARD_STEP

type TrialParts = Pick<Trial, 'id' | 'title' | 'stages' | 'guard' | 'target'>

function assessTrial(design: Design, parts: TrialParts, depth: AssessDepth): Trial | { reasons: Reason[] } {
  const spec: ChainSpec = {
    filter: sizeFilter(design),
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
  const reasons = assessment.pins
    .filter((pin) => stateOf(pin, design.rules) === 'over')
    .map((pin) => clipReason(design, pin))
  for (const load of toLoads(assessment)) if (load.state === 'over') reasons.push(loadReason(load))
  if (!assessment.bound.keepsSign)
    reasons.push({
      code: 'pole-in-box',
      text: 'Within its tolerances the network passes through a point where it has no stable answer: take closer resistors or another arrangement.',
      numbers: {},
    })
  return { ...parts, spec, assessment, reasons }
}

/** Considers one arrangement as the only stage. */
export function trySingle(design: Design, arrangement: Arrangement): TrialResult {
  const { need: base } = requirementOf(design)
  const size: SizeChain = (target) => {
    const need: Need = { ...base, target }
    const stage = sizeOne(design, arrangement, need, '', design.choose.pick ?? 0)
    return stage.ok
      ? { ok: true, stages: [{ ref: 'S1', arrangement, sized: stage.sized, need }] }
      : { ok: false, reasons: [stage.reason] }
  }
  const { id, title } = arrangement
  if (!isGiven(design, arrangement, { ...base, target: design.converter.input }))
    return settleChain(design, id, title, size)
  // A circuit that exists moves with no guard band: it is judged against the target that a free choice would have had.
  const { values: _given, ...choose } = design.choose
  const free = trySingle({ ...design, choose }, arrangement)
  const start = design.converter.guard ?? (free.ok ? free.trial.guard : { low: 0, high: 0 })
  return settleWith(design, id, title, size, { keep: null, start }, 'every-board')
}

/** True where a person fixed every value that the arrangement's equations would choose. */
export function isGiven(design: Design, arrangement: Arrangement, need: Need): boolean {
  const fixed = design.choose.values ?? {}
  const anatomy = arrangement.anatomy(need, fixed)
  if (!anatomy?.form) return false
  const copies = Object.entries(anatomy.copies ?? {})
  return formRefs(anatomy.form).every(
    (ref) => fixed[ref] !== undefined || copies.some(([copy, of]) => of === ref && fixed[copy] !== undefined),
  )
}

/** Ideal-model existence, then standard values. */
export function sizeOne(design: Design, arrangement: Arrangement, need: Need, suffix: string, pick: number) {
  const considered = arrangement.consider(need)
  if (!considered.ok) {
    const anatomy =
      suffix === '' && askedArrangement(design) === arrangement.id && isGiven(design, arrangement, need)
        ? arrangement.anatomy(need, design.choose.values ?? {})
        : null
    if (!anatomy) return { ok: false as const, reason: considered.reason }
    // The equations would not ask for it, yet it exists: the analyses say what it does.
    const sizing = { ...anatomy, target: oriented(need, arrangement.inverting ? -1 : 1), dropsOffset: false }
    return sizeStage(design, arrangement, need, sizing, suffix, pick)
  }
  return sizeStage(design, arrangement, need, considered.sizing, suffix, pick)
}

/** Arrangements that take the kind of signal a sensor gives. */
export function arrangementsFor(differential: boolean): Arrangement[] {
  return arrangements.filter((a) => (a.signal === 'differential') === differential)
}
