import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { assess } from '#shared/budget/assess.ts'
import { toHeadroom, toLevels } from '#shared/budget/headroom.ts'
import { toLoads } from '#shared/budget/loads.ts'
import { checkModel } from '#shared/budget/model-check.ts'
import { checkOverVoltage } from '#shared/budget/over-voltage.ts'
import { firstOrderTolerance } from '#shared/budget/tolerance.ts'
import { attenuationDb, loadedBy, settlingTime } from '#shared/filters/rc.ts'
import type { Network } from '#shared/network/types.ts'
import { hashOf } from './canonical.ts'
import { cautionsFor } from './cautions.ts'
import { buildChain } from './chain.ts'
import { toCode } from './codes.ts'
import { componentsOf } from './components.ts'
import { findingsFor } from './findings.ts'
import { arrangementsFor, trySingle } from './plan-stage.ts'
import { requirementOf } from './requirement.ts'
import { reasonsAgainst, targetFor, type Trial, type TrialResult } from './settle.ts'
import { askedArrangement } from './asked.ts'
import { splitsFor, tryTwo, type Split } from './plan-two-stages.ts'
import type { Candidate, Ends, Plan, Realised } from './plan.ts'
import { rankTrial } from './ranking.ts'
import { DesignRefused, readDesign } from './read.ts'
import { roundPlan } from './round.ts'
import type { Design } from './schema.ts'

/** Version of the engine, in every plan; raised whenever a figure could change. */
export const ENGINE_VERSION = '1.0.0'

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
  const candidates = ranked
    .map(({ result, rank }) => toCandidate(design, result, rank, lsb, asked))
    .sort((a, b) => Number(b.feasible) - Number(a.feasible))
  const askedAt = asked === undefined ? -1 : candidates.findIndex((c) => c.arrangement === asked)
  const firstFeasible = candidates.findIndex((c) => c.feasible)
  const chosen = askedAt >= 0 ? askedAt : firstFeasible >= 0 ? firstFeasible : null
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
): Candidate {
  if (!result.ok || !rank)
    return {
      arrangement: idOf(result),
      title: result.ok ? result.trial.title : result.title,
      feasible: false,
      reasons: result.ok ? result.trial.reasons : result.reasons,
    }
  const { trial } = result
  const settled = trial.reasons.length === 0
  const wanted = settled || trial.id === asked
  const assessment = wanted ? assess(design, trial.spec, 'with-clips') : trial.assessment
  // What every board does decides, whatever the search for a target ended on.
  const reasons = wanted ? reasonsAgainst(design, assessment) : trial.reasons
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
  return reasons.length === 0 || trial.id === asked
    ? { ...head, ...details(design, { ...trial, assessment, reasons }, lsb) }
    : head
}

const stageGain = (s: Trial['stages'][number]): number =>
  (s.sized.ends[1] - s.sized.ends[0]) / (s.need.signal.high - s.need.signal.low)

function details(design: Design, trial: Trial, lsb: number): Partial<Candidate> {
  const { assessment, spec, stages } = trial
  const { chains } = assessment
  const last = stages[stages.length - 1]
  const realised = realise(design, trial, lsb)
  const model = checkModel(design, chains, realised.converter.high - realised.converter.low, lsb)
  const loads = toLoads(assessment)
  const overVoltage = checkOverVoltage(design, chains.low, spec.filter.resistance)
  const part: Partial<Candidate> = {
    components: componentsOf(design, trial),
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
    tolerance: firstOrderTolerance(design, chains),
    filter: filterSummary(design, trial),
    equations: stages.flatMap((s) =>
      s.arrangement.equations(s.sized.values, s.sized.sizing, s.need).map((e) => ({
        ...e,
        name: stages.length > 1 ? `${e.name}, ${s.ref}` : e.name,
      })),
    ),
    netlist: netlistOf(design, trial),
  }
  const candidate = { arrangement: trial.id, title: trial.title, feasible: true, reasons: [], ...part }
  return { ...part, findings: findingsFor(design, assessment.pins, { model, loads, overVoltage, candidate }) }
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
  const goal = aimed ? { low: aimed.low * trial.loading, high: aimed.high * trial.loading } : trial.target
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

function filterSummary(design: Design, trial: Trial): NonNullable<Candidate['filter']> {
  const { sensor, converter, rules } = design
  // Without an amplifier before it the source stands in series with the filter.
  const direct = trial.stages[0]?.arrangement.amplifiers === 0
  const filter = direct
    ? loadedBy(trial.spec.filter, requirementOf(design).need.sourceResistance)
    : trial.spec.filter
  return {
    kind: filter.kind,
    resistance: trial.spec.filter.resistance,
    capacitance: filter.capacitance,
    corner: filter.corner,
    droopAtBandwidth: sensor.bandwidth === undefined ? null : attenuationDb(filter, sensor.bandwidth),
    atHalfSampleRate:
      converter.sampleRate === undefined ? null : attenuationDb(filter, converter.sampleRate / 2),
    settling: settlingTime(filter, converter.bits, rules.settling),
  }
}

function netlistOf(design: Design, trial: Trial): string {
  const high = trial.assessment.chains.high.network
  const low = trial.assessment.chains.low.network
  const changes = high.elements.flatMap((e, i) => {
    const other = low.elements[i]
    return other && 'value' in e && 'value' in other && e.value !== other.value
      ? [`${e.ref} = ${e.value}`]
      : []
  })
  const { quantity } = design.sensor
  return toSpice(low, {
    comments: [
      `${trial.title}; measurand at ${quantity.low} ${quantity.unit}`,
      `At ${quantity.high} ${quantity.unit}:`,
      ...changes,
      `Output: ${low.output.p}`,
    ],
    analysis: 'op',
  })
}

/** The network of a candidate at quantity.low, as every analysis reads it: for drawings and checks. */
export function buildNetworkFor(document: unknown, candidate: Candidate): Network | null {
  const read = readDesign(document)
  if (!read.ok) throw new DesignRefused(read.faults)
  const asked = { ...read.design, choose: { ...read.design.choose, arrangement: candidate.arrangement } }
  const trial = findTrial(asked, candidate)
  return trial ? buildChain(asked, trial.spec, asked.sensor.quantity.low).network : null
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
