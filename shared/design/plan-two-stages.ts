import type { Arrangement, Need } from '#shared/amplifiers/define.ts'
import type { AssessDepth } from '#shared/budget/assess.ts'
import { slope } from '#shared/amplifiers/define.ts'
import { oriented } from '#shared/amplifiers/place.ts'
import type { Ends } from './plan.ts'
import type { Design } from './schema.ts'
import { askedArrangement } from './asked.ts'
import { arrangementsFor, sizeOne } from './plan-stage.ts'
import { requirementOf } from './requirement.ts'
import { settleChain, type TrialResult } from './settle.ts'

/** Above this total gain a split can keep more loop gain in each stage. */
const LARGE_GAIN = 20
/** Share of the total gain that the first stage takes, as exponents and quotients that are tried. */
const SPLITS = (gain: number): number[] => [Math.sqrt(gain), gain / 2, gain / 4, gain / 10]

const FIRST_SINGLE = ['non-inverting']
const FIRST_DIFFERENTIAL = [
  'integrated-instrumentation',
  'integrated-instrumentation-grounded',
  'difference',
  'difference-grounded',
]

export interface Split {
  first: Arrangement
  second: Arrangement
  /** Gain of the first stage. */
  gain: number
}

/** Pairs of arrangements and gain splits worth trying for a design, or the one that a person asks for. */
export function splitsFor(design: Design, singleFound: boolean): Split[] {
  const { need } = requirementOf(design)
  const wanted = askedArrangement(design)?.split('+')
  const asked = wanted?.length === 2 ? wanted : null
  const target = { low: design.converter.input.low, high: design.converter.input.high }
  const total = Math.abs(slope({ ...need, target }, oriented({ ...need, target }, 1)))
  if (!asked && singleFound && total < LARGE_GAIN) return []
  const ids = asked?.[0] ? [asked[0]] : need.differential ? FIRST_DIFFERENTIAL : FIRST_SINGLE
  const chosenGain = firstGain(design, total)
  const gains = chosenGain ? [chosenGain] : SPLITS(total).filter((g) => g > 1.2)
  const firsts = arrangementsFor(need.differential).filter((a) => ids.includes(a.id) && a.amplifiers > 0)
  const seconds = arrangementsFor(false).filter(
    (a) =>
      a.amplifiers > 0 &&
      (asked ? a.id === asked[1] : !a.inverting && a.id !== 'follower' && a.id !== 'attenuator'),
  )
  return firsts.flatMap((first) =>
    seconds.flatMap((second) => gains.map((gain) => ({ first, second, gain }))),
  )
}

/** Gain that a person gives the first stage, directly or by what the second is to have. */
function firstGain(design: Design, total: number): number | undefined {
  const gain = (ref: 'S1' | 'S2') => design.choose.stages?.find((s) => s.ref === ref)?.gain
  const second = gain('S2')
  return gain('S1') ?? (second ? total / Math.abs(second) : undefined)
}

/**
 * Two stages: the first brings the signal to `split.gain` times its size about a level in the middle of its linear
 * region (or about ground), the second does the rest. Values are exact per stage for the split.
 */
export function tryTwo(design: Design, split: Split, depth: AssessDepth): TrialResult {
  const { need: base } = requirementOf(design)
  const id = `${split.first.id}+${split.second.id}`
  const title = `${split.first.title}, then ${split.second.title.charAt(0).toLowerCase()}${split.second.title.slice(1)}`
  const firstNeed: Need = { ...base, target: firstTarget(design, split, base) }
  const first = sizeFirst(design, split, firstNeed)
  if (!first.ok) return { ok: false, id, title, reasons: [first.reason] }
  const [low, high] = first.sized.ends
  return settleChain(
    design,
    id,
    title,
    (target) => {
      const need: Need = {
        ...base,
        signal: { low, high },
        differential: false,
        commonMode: null,
        sourceResistance: 0,
        floating: false,
        level: null,
        target,
      }
      const second = sizeOne(design, split.second, need, 'B', design.choose.pick ?? 0)
      return second.ok
        ? {
            ok: true,
            stages: [
              { ref: 'S1', arrangement: split.first, sized: first.sized, need: firstNeed },
              { ref: 'S2', arrangement: split.second, sized: second.sized, need },
            ],
          }
        : { ok: false, reasons: [second.reason] }
    },
    depth,
  )
}

const sizedFirst = new WeakMap<Design, Map<string, ReturnType<typeof sizeOne>>>()

/** The first stage of a split, the same for every second stage that follows it. */
function sizeFirst(design: Design, { first, gain }: Split, need: Need): ReturnType<typeof sizeOne> {
  let known = sizedFirst.get(design)
  if (!known) sizedFirst.set(design, (known = new Map()))
  const key = `${first.id} ${gain}`
  let found = known.get(key)
  if (!found) known.set(key, (found = sizeOne(design, first, need, '', 0)))
  return found
}

/** Where the first stage's output is to lie: its span centred in the linear region, or as ground leaves it. */
function firstTarget(design: Design, split: Split, base: Omit<Need, 'target'>): Ends {
  const span = Math.abs(base.signal.high - base.signal.low) * split.gain
  if (split.first.id.endsWith('-grounded') || !base.differential) {
    const ends = [base.signal.low * split.gain, base.signal.high * split.gain]
    return { low: Math.min(...ends), high: Math.max(...ends) }
  }
  const part = split.first.id.startsWith('integrated') ? design.parts.instrumentation : design.parts.amplifier
  const bottom = design.rails.negative + part.outputLow
  const top = design.rails.positive - part.outputHigh
  const middle = (bottom + top) / 2
  const centred = { low: middle - span / 2, high: middle + span / 2 }
  if (split.first.id.endsWith('-at-reference') || !base.reference) return centred
  // A divider gives levels between ground and the reference only.
  const level = centred.low - (span / (base.signal.high - base.signal.low)) * base.signal.low
  const reach =
    Math.min(Math.max(level, 0.05 * base.reference.voltage), 0.95 * base.reference.voltage) - level
  return { low: centred.low + reach, high: centred.high + reach }
}
