import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { assess, type Assessment } from '#shared/budget/assess.ts'
import { toHeadroom, toLevels } from '#shared/budget/headroom.ts'
import { toLoads } from '#shared/budget/loads.ts'
import { sizeDrive } from '#shared/budget/drive.ts'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { computeBudget } from '#shared/budget/error-budget.ts'
import { describeFilter } from '#shared/budget/filter-plan.ts'
import { checkModel } from '#shared/budget/model-check.ts'
import { summariseNoise } from '#shared/budget/noise.ts'
import { checkOverVoltage } from '#shared/budget/over-voltage.ts'
import { checkStability } from '#shared/budget/stability.ts'
import { behindFilter } from '#shared/filters/filter-spec.ts'
import type { Network } from '#shared/network/types.ts'
import { hashOf } from './canonical.ts'
import { cautionsFor } from './cautions.ts'
import { buildChain, type ChainSpec } from './chain.ts'
import { toCode } from './codes.ts'
import { componentsOf } from './components.ts'
import { findingsFor, worstFirst } from './findings.ts'
import { qualityFindings, stabilityReasons, steadiedFinding } from './quality-findings.ts'
import { arrangementsFor, isGiven, trySingle } from './plan-stage.ts'
import { requirementOf } from './requirement.ts'
import { reasonsAgainst, targetFor, type Trial, type TrialResult } from './settle.ts'
import { askedArrangement } from './asked.ts'
import { splitsFor, tryTwo, type Split } from './plan-two-stages.ts'
import type { Candidate, Ends, Plan, Realised, StabilityEntry } from './plan.ts'
import { rankTrial } from './ranking.ts'
import { rateFindings } from './rate-findings.ts'
import { DesignRefused, readDesign } from './read.ts'
import { roundPlan } from './round.ts'
import type { Design } from './schema.ts'

/** Version of the engine, in every plan; raised whenever a figure could change. */
export const ENGINE_VERSION = '1.1.0'

/**
 * Plans a design document: requirement, candidates with their analyses, the chosen one. Pure: the same document gives
 * the same plan in the browser, on the server and from the command line. SI units.
 *
 * @throws DesignRefused with one fault a line when the document is not a design
 */
export function planDesign(document: unknown): Plan {
  const read = readDesign(document)
  if (!read.ok) throw new DesignRefused(read.faults)
  return roundPlan(planRead(read.design, hashOf(document)))
}

function planRead(design: Design, designHash: string): Plan {
  const { converter } = design
  const requirement = requirementOf(design)
  const lsb = (converter.input.high - converter.input.low) / 2 ** converter.bits
  const results = tryAll(design)
  const ranked = results
    .map((result) => ({ result, rank: result.ok ? rankTrial(design, result.trial) : null }))
    .sort((a, b) => order(a) - order(b))
  const asked = askedArrangement(design)
  const judged = ranked
    .map(({ result, rank }) => toCandidate(design, result, rank, lsb, asked))
    .sort((a, b) => Number(b.candidate.feasible) - Number(a.candidate.feasible))
  const askedAt = asked === undefined ? -1 : judged.findIndex((j) => j.candidate.arrangement === asked)
  const firstFeasible = judged.findIndex((j) => j.candidate.feasible)
  const chosen = askedAt >= 0 ? askedAt : firstFeasible >= 0 ? firstFeasible : null
  const candidates = judged.map(({ candidate, spec }, at) =>
    at === chosen && spec && candidate.realised ? withQuality(design, spec, candidate) : candidate,
  )
  const taken = chosen === null ? undefined : candidates[chosen]
  const target =
    taken?.target ??
    targetFor(design, converter.guard ?? { low: 0, high: 0 }, { low: 0, high: 0 }, requirement.signal, null)
  const gain = (target.high - target.low) / (requirement.signal.high - requirement.signal.low)
  return {
    format: 'spandrel-plan/1',
    engine: ENGINE_VERSION,
    designHash,
    required: {
      gain,
      offset: target.low - gain * requirement.signal.low,
      per: 'V',
      target,
      guarded: guarded(design, taken?.guard ?? converter.guard ?? { low: 0, high: 0 }),
      sensor: requirement.signal,
    },
    lsb,
    candidates,
    chosen,
    findings:
      asked !== undefined && askedAt < 0
        ? [
            {
              code: 'unknown-arrangement',
              severity: 'over',
              place: 'S1',
              path: 'choose.arrangement',
              text: `The arrangement "${asked}" is not one of those considered for this ${requirement.need.differential ? 'differential' : 'single-ended'} signal; the plan chose for itself.`,
              numbers: {},
            },
          ]
        : [],
    cautions: cautionsFor(design),
  }
}

function guarded(design: Design, guard: Ends): Ends {
  const { low, high } = design.converter.input
  return { low: low + guard.low * (high - low), high: high - guard.high * (high - low) }
}

function tryAll(design: Design): TrialResult[] {
  const { need } = requirementOf(design)
  if (design.converter.wiring === 'differential')
    return arrangementsFor(need.differential).map((a) => ({
      ok: false,
      id: a.id,
      title: a.title,
      reasons: [
        {
          code: 'differential-converter',
          text: 'This converter takes a differential input; the arrangements here drive a single-ended one. Use the converter single-ended, or state its single-ended range.',
          numbers: {},
        },
      ],
    }))
  const singles = arrangementsFor(need.differential).map((a) => trySingle(design, a))
  const found = singles.some((r) => r.ok && r.trial.reasons.length === 0)
  return [...singles, ...bestSplits(design, found)]
}

/** Two-stage chains carried through to every board, where one stage does it too and where none does. */
const MOST_SPLITS = { beside: 1, alone: 2 }

/**
 * Of all splits of one pair of arrangements the best on the nominal board is kept, and of the pairs the best few; pairs
 * that never exist are left out.
 */
function bestSplits(design: Design, singleFound: boolean): TrialResult[] {
  const asked = askedArrangement(design)
  const best = new Map<string, { split: Split; score: number }>()
  for (const split of splitsFor(design, singleFound)) {
    const result = tryTwo(design, split, 'nominal')
    const id = idOf(result)
    const works = result.ok && result.trial.reasons.length === 0
    if (!works && id !== asked) continue
    const score = works ? rankTrial(design, result.trial).score : Infinity
    const known = best.get(id)
    if (!known || score < known.score) best.set(id, { split, score })
  }
  return [...best.values()]
    .sort((a, b) => a.score - b.score)
    .slice(0, singleFound ? MOST_SPLITS.beside : MOST_SPLITS.alone)
    .map(({ split }) => tryTwo(design, split, 'every-board'))
}

const idOf = (result: TrialResult): string => (result.ok ? result.trial.id : result.id)

/** A candidate, and the chain that it stands for where there is one. */
interface Judged {
  candidate: Candidate
  spec: ChainSpec | null
}

type Ranked = { result: TrialResult; rank: ReturnType<typeof rankTrial> | null }

/** Feasible by score, then those that exist but clip, then those that do not exist. */
function order({ result, rank }: Ranked): number {
  if (!result.ok || !rank) return 2e6
  return (result.trial.reasons.length > 0 ? 1e6 : 0) + rank.score
}

function toCandidate(
  design: Design,
  result: TrialResult,
  rank: ReturnType<typeof rankTrial> | null,
  lsb: number,
  asked: string | undefined,
): Judged {
  if (!result.ok || !rank) {
    const candidate: Candidate = {
      arrangement: idOf(result),
      title: result.ok ? result.trial.title : result.title,
      feasible: false,
      reasons: result.ok ? result.trial.reasons : result.reasons,
    }
    return { candidate, spec: null }
  }
  const { trial } = result
  const settled = trial.reasons.length === 0
  const wanted = settled || trial.id === asked
  const assessment = wanted ? assess(design, trial.spec, 'with-clips') : trial.assessment
  // What every board does decides, whatever the search for a target ended on.
  const clips = wanted ? reasonsAgainst(design, assessment) : trial.reasons
  const { spec, stability, added } = wanted
    ? steady(design, trial)
    : { spec: trial.spec, stability: [], added: [] }
  const reasons = [...clips, ...stability.flatMap(stabilityReasons)]
  const head: Candidate = {
    arrangement: trial.id,
    ...(trial.stages.length > 1
      ? {
          stages: trial.stages.map((s) => ({
            ref: s.ref,
            arrangement: s.arrangement.id,
            gain: stageGain(s),
          })),
        }
      : {}),
    title: trial.title,
    feasible: reasons.length === 0,
    reasons,
    ranking: rank,
    target: trial.target,
    guard: trial.guard,
  }
  // Someone who asks for an arrangement sees what it does even where it clips.
  const candidate =
    reasons.length === 0 || trial.id === asked
      ? { ...head, stability, ...details(design, { ...trial, spec, assessment, reasons }, stability, lsb) }
      : head
  if (candidate.findings) candidate.findings.push(...added.map(steadiedFinding))
  return { candidate, spec }
}

/**
 * Adds the feedback capacitor that an amplifier needs to stand firm, as a designer would. A circuit that exists is left
 * as it is: it gets the finding.
 */
function steady(
  design: Design,
  trial: Trial,
): { spec: ChainSpec; stability: StabilityEntry[]; added: StabilityEntry[] } {
  const { spec } = trial
  const stability = checkStability(design, spec)
  const exists = trial.stages.some((s) => isGiven(design, s.arrangement, s.need))
  const added = exists ? [] : stability.filter((entry) => capacitorFor(entry) !== undefined)
  if (added.length === 0) return { spec, stability, added }
  const compensation = Object.fromEntries(
    added.flatMap((entry) => Object.entries(capacitorFor(entry)?.values ?? {})),
  )
  const firm = { ...spec, compensation }
  return { spec: firm, stability: checkStability(design, firm), added }
}

const capacitorFor = ({ state, cures }: StabilityEntry) =>
  state === 'clear' ? undefined : cures.find(({ kind }) => kind === 'feedback-capacitor')

/** What is computed for the chosen candidate alone: error, noise, dynamics, filter and drive, with their findings. */
function withQuality(design: Design, spec: ChainSpec, candidate: Candidate): Candidate {
  const noise = summariseNoise(design, spec)
  const dynamics = computeDynamics(design, spec)
  const quality = {
    noise,
    dynamics,
    budget: computeBudget(design, spec, noise),
    filter: describeFilter(design, spec),
    drive: sizeDrive(design, spec, dynamics),
  }
  const findings = [
    ...(candidate.findings ?? []),
    ...qualityFindings(design, quality),
    ...rateFindings(design, dynamics, quality.filter),
  ]
  return { ...candidate, ...quality, findings: worstFirst(findings) }
}

const stageGain = (s: Trial['stages'][number]): number =>
  (s.sized.ends[1] - s.sized.ends[0]) / (s.need.signal.high - s.need.signal.low)

function details(design: Design, trial: Trial, stability: StabilityEntry[], lsb: number): Partial<Candidate> {
  const { assessment, spec, stages } = trial
  const chains = chainsOf(design, trial)
  const last = stages[stages.length - 1]
  const realised = realise(design, trial, lsb)
  const model = checkModel(design, chains, realised.converter.high - realised.converter.low, lsb)
  const loads = toLoads(assessment)
  const overVoltage = checkOverVoltage(design, chains.low, spec.filter.drive.resistance)
  const part: Partial<Candidate> = {
    components: componentsOf(design, { ...trial, assessment: { ...assessment, chains } }),
    picks: last?.sized.picks ?? [],
    pick: last?.sized.pick ?? 0,
    ...(last?.sized.optimum ? { optimum: last.sized.optimum } : {}),
    realised,
    levels: toLevels(design, assessment),
    headroom: assessment.pins.map((pin) => toHeadroom(pin, design.rules)),
    bound: {
      vertices: assessment.bound.vertices,
      resistors: assessment.bound.resistors,
      proven: assessment.bound.proven,
    },
    model,
    overVoltage,
    loads,
    equations: stages.flatMap((s) =>
      s.arrangement.equations(s.sized.values, s.sized.sizing, s.need).map((e) => ({
        ...e,
        name: stages.length > 1 ? `${e.name}, ${s.ref}` : e.name,
      })),
    ),
    netlist: netlistOf(design, trial.title, chains),
  }
  const candidate = { arrangement: trial.id, title: trial.title, feasible: true, reasons: [], ...part }
  return {
    ...part,
    findings: findingsFor(design, assessment.pins, { model, loads, overVoltage, stability, candidate }),
  }
}

function realise(design: Design, trial: Trial, lsb: number): Realised {
  const { assessment, stages } = trial
  const { chains, y } = assessment
  const ideal = {
    low: solveDc(chains.low.network, { model: 'ideal' }).output,
    high: solveDc(chains.high.network, { model: 'ideal' }).output,
  }
  const { signal } = requirementOf(design)
  const gain = (y.nominal.high - y.nominal.low) / (signal.high - signal.low)
  const aimed = stages[stages.length - 1]?.sized.sizing.target
  const atPin = (volts: number) => behindFilter(trial.spec.filter, volts) * trial.loading
  const goal = aimed ? { low: atPin(aimed.low), high: atPin(aimed.high) } : trial.target
  const error = { low: y.nominal.low - goal.low, high: y.nominal.high - goal.high }
  const { quantity } = design.sensor
  const perVolt = (quantity.high - quantity.low) / (y.nominal.high - y.nominal.low)
  const codes = {
    low: toCode(design.converter, y.nominal.low),
    high: toCode(design.converter, y.nominal.high),
  }
  return {
    gain,
    offset: y.nominal.low - gain * signal.low,
    per: 'V',
    converter: y.nominal,
    ideal,
    endpointError: error,
    endpointErrorLsb: { low: error.low / lsb, high: error.high / lsb },
    endpointErrorQuantity: { low: error.low * perVolt, high: error.high * perVolt },
    codes,
    codesUsed: Math.abs(y.nominal.high - y.nominal.low) / lsb,
    worst: y.worst,
  }
}

/** Networks at both ends with the feedback capacitors, which the bounds, at DC, have no need of. */
function chainsOf(design: Design, { assessment, spec }: Trial): Assessment['chains'] {
  if (!spec.compensation) return assessment.chains
  const { low, high } = design.sensor.quantity
  return { low: buildChain(design, spec, low), high: buildChain(design, spec, high) }
}

function netlistOf(design: Design, title: string, chains: Assessment['chains']): string {
  const high = chains.high.network
  const low = chains.low.network
  const changes = high.elements.flatMap((e, i) => {
    const other = low.elements[i]
    return other && 'value' in e && 'value' in other && e.value !== other.value
      ? [`${e.ref} = ${e.value}`]
      : []
  })
  const { quantity } = design.sensor
  return toSpice(low, {
    comments: [
      `${title}; measurand at ${quantity.low} ${quantity.unit}`,
      `At ${quantity.high} ${quantity.unit}:`,
      ...changes,
      `Output: ${low.output.p}`,
    ],
    analysis: 'op',
  })
}

/** A candidate of a design's plan, built again for drawings, curves and studies. */
export interface Prepared {
  design: Design
  spec: ChainSpec
  candidate: Candidate
}

/** The chain of a candidate as the plan decided it; null where it has none. Throws DesignRefused. */
export function prepareCandidate(document: unknown, candidate: Candidate): Prepared | null {
  const read = readDesign(document)
  if (!read.ok) throw new DesignRefused(read.faults)
  const design = { ...read.design, choose: { ...read.design.choose, arrangement: candidate.arrangement } }
  const trial = findTrial(design, candidate)
  if (!trial) return null
  const own = (candidate.components ?? []).filter((c) => c.kind === 'capacitor' && /^CU\d+$/.test(c.ref))
  const compensation = Object.fromEntries(own.map((c) => [c.ref, c.value ?? 0]))
  return { design, candidate, spec: own.length > 0 ? { ...trial.spec, compensation } : trial.spec }
}

/** The network of a candidate at quantity.low, as every analysis reads it: for drawings and checks. */
export function buildNetworkFor(document: unknown, candidate: Candidate): Network | null {
  const prepared = prepareCandidate(document, candidate)
  return prepared
    ? buildChain(prepared.design, prepared.spec, prepared.design.sensor.quantity.low).network
    : null
}

function findTrial(design: Design, candidate: Candidate): Trial | null {
  const results = candidate.arrangement.includes('+')
    ? bestSplits(design, true)
    : arrangementsFor(requirementOf(design).need.differential)
        .filter((a) => a.id === candidate.arrangement)
        .map((a) => trySingle(design, a))
  const found = results.find((r) => idOf(r) === candidate.arrangement)
  return found?.ok ? found.trial : null
}
