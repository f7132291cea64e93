import type { Equation, Reason } from '#shared/design/plan.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { gainAndOffset, leg, ohms, voltsText } from '../equation.ts'
import {
  intercept,
  refuse,
  slope,
  type Anatomy,
  type Arrangement,
  type Consideration,
  type LevelFeed,
  type Need,
  type Sizing,
} from '../define.ts'
import { shiftReference, supplyReason } from '../needs.ts'
import type { LevelForm, ValueForm } from '../picker/index.ts'
import { oriented, placeWithOffset } from '../place.ts'
import type { StageBuilder } from '../stage-builder.ts'

/**
 * What the stages for a differential signal share: gain by a few resistors, and an output level made at a reference
 * leg. u = G·d + level. The leg takes ground, a reference as it is, or a divider with a follower; a bare divider would
 * spend common-mode rejection (common practice: 1 Ω in a 10 kΩ leg leaves 86 dB).
 */
export interface DifferentialStage {
  id: string
  title: string
  amplifiers: number
  roles: Record<string, string>
  gainRange(need: Need): { minimum: number; maximum: number }
  /** Why the part or supply cannot be used at all; null when it can. */
  unavailable(need: Need): Reason | null
  /** Inputs draw their bias current through the source alone. */
  needsBiasReturn: boolean
  form(need: Need, gain: number, level: LevelForm): ValueForm
  copies(gain: number): Record<string, string>
  preset(need: Need): Record<string, number>
  build(stage: StageBuilder, values: Record<string, number>, level: string, need: Need): void
  gain(values: Record<string, number>, need: Need): { symbolic: string; numeric: string; value: number }
}

const variants: { feed: LevelFeed; suffix: string; words: string }[] = [
  { feed: { kind: 'divider' }, suffix: '', words: ', level from a buffered divider' },
  { feed: { kind: 'ground' }, suffix: '-grounded', words: ', reference leg at ground' },
  { feed: { kind: 'reference' }, suffix: '-at-reference', words: ', reference leg at the reference' },
]

/** The three ways to feed the reference leg, each an arrangement of its own. */
export function withLevels(base: DifferentialStage): Arrangement[] {
  return variants.map(({ feed, suffix, words }) => ({
    id: base.id + suffix,
    title: base.title + words,
    signal: 'differential',
    inverting: false,
    amplifiers: base.amplifiers,
    roles:
      feed.kind === 'divider'
        ? { ...base.roles, R7: 'Level, upper leg', R8: 'Level, lower leg' }
        : base.roles,
    consider: (need) => consider(base, feed, need),
    anatomy(need, fixed) {
      const level = levelForm(feed, need)
      // With a gain resistor a two-amplifier stage has more gain than 2; without one, less.
      return level && anatomy(base, feed, need, fixed.Rg === undefined ? 1.5 : 3, level)
    },
    build(stage, values, _sizing, need) {
      // The stage comes first, so that designators count along the signal and the buffer of the level last.
      base.build(stage, values, levelNode(stage, feed), need)
      if (feed.kind === 'divider') buildLevel(stage, values)
    },
    equations: (values, _sizing, need) => equations(base, feed, values, need),
  }))
}

function consider(base: DifferentialStage, feed: LevelFeed, need: Need): Consideration {
  const reason = base.unavailable(need) ?? supplyReasonFor(base, feed, need)
  if (reason) return { ok: false, reason }
  if (need.floating && base.needsBiasReturn)
    return refuse(
      'bias-return',
      'The source floats and these inputs draw their bias current through it alone: it needs a bias return, a resistor from each leg to ground or to a mid-supply level.',
    )
  const range = base.gainRange(need)
  if (feed.kind === 'ground') return fixedLevel(base, feed, need, 0, range)
  const reference = shiftReference(need)
  if ('reason' in reference) return { ok: false, reason: reference.reason }
  if (feed.kind === 'reference') {
    if (!reference.buffered)
      return refuse(
        'reference-unbuffered',
        'The reference is not buffered: a reference leg needs a stiff level. Take the buffered divider, or buffer the reference.',
      )
    return fixedLevel(base, feed, need, reference.voltage, range)
  }
  if (need.level !== null) {
    const placed = placeWithOffset(need, 1, need.level, range)
    if (!placed || need.level <= 0 || need.level >= reference.voltage)
      return refuse(
        'level-misses',
        `With the level at ${voltsText(need.level)} no gain lands inside the target.`,
        {
          level: need.level,
        },
      )
    return dividerSizing(base, need, placed.target, reference, placed.short)
  }
  const target = oriented(need, 1)
  const gain = slope(need, target)
  const level = intercept(need, target)
  if (gain < range.minimum || gain > range.maximum)
    return refuse(
      'gain-range',
      `The gain is ${times(gain)}; this stage gives ${times(range.minimum)} to ${times(range.maximum)}.`,
      { gain, ...range },
    )
  if (level <= 0 || level >= reference.voltage)
    return refuse(
      'level-outside',
      `The level at the reference leg would be ${voltsText(level)}; a divider gives more than 0 V and less than ${voltsText(reference.voltage)}.`,
      { level, reference: reference.voltage },
    )
  return dividerSizing(base, need, target, reference, false)
}

const times = (gain: number): string => formatQuantity(gain, '', { digits: 4 })

function supplyReasonFor(base: DifferentialStage, feed: LevelFeed, need: Need): Reason | null {
  return base.amplifiers > 1 || feed.kind === 'divider' || base.id === 'difference'
    ? supplyReason(need)
    : null
}

function fixedLevel(
  base: DifferentialStage,
  feed: LevelFeed,
  need: Need,
  level: number,
  range: { minimum: number; maximum: number },
): Consideration {
  const placed = placeWithOffset(need, 1, level, range)
  if (!placed)
    return refuse(
      'level-misses',
      `With the reference leg at ${voltsText(level)} no gain from ${times(range.minimum)} to ${times(range.maximum)} brings the whole signal inside the target.`,
      { level },
    )
  return {
    ok: true,
    sizing: {
      target: placed.target,
      ...anatomy(base, feed, need, placed.gain, { volts: level }),
      dropsOffset: placed.short,
    },
  }
}

function dividerSizing(
  base: DifferentialStage,
  need: Need,
  target: Sizing['target'],
  reference: { voltage: number; resistance: number },
  dropsOffset: boolean,
): Consideration {
  const level = { reference: reference.voltage, referenceResistance: reference.resistance }
  return {
    ok: true,
    sizing: {
      target,
      ...anatomy(base, { kind: 'divider' }, need, slope(need, target), level),
      dropsOffset,
    },
  }
}

function anatomy(
  base: DifferentialStage,
  feed: LevelFeed,
  need: Need,
  gain: number,
  level: LevelForm,
): Anatomy {
  return {
    form: base.form(need, gain, level),
    copies: base.copies(gain),
    preset: base.preset(need),
    level: feed,
  }
}

/** How the picker sees the level of a feed; null where the reference for it is missing. */
function levelForm(feed: LevelFeed, need: Need): LevelForm | null {
  if (feed.kind === 'ground') return { volts: 0 }
  if (!need.reference) return null
  return feed.kind === 'reference'
    ? { volts: need.reference.voltage }
    : { reference: need.reference.voltage, referenceResistance: need.reference.resistance }
}

/** The node at the reference leg. */
function levelNode(stage: StageBuilder, feed: LevelFeed): string {
  if (feed.kind === 'ground') return '0'
  return feed.kind === 'reference' ? 'vref' : stage.node('level')
}

/** Divider R7, R8 of the reference and the follower that makes its tap stiff. */
function buildLevel(stage: StageBuilder, values: Record<string, number>): void {
  const tap = stage.node('lvl')
  const level = stage.node('level')
  stage.resistor('R7', 'vref', tap, values.R7, 'level')
  stage.resistor('R8', tap, '0', values.R8, 'level')
  stage.amplifier(tap, level, level, 'level')
}

function equations(
  base: DifferentialStage,
  feed: LevelFeed,
  values: Record<string, number>,
  need: Need,
): Equation[] {
  const gain = base.gain(values, need)
  const v = need.reference?.voltage ?? 0
  if (feed.kind === 'ground') return gainAndOffset(gain, { symbolic: '0', numeric: '0', value: 0 })
  if (feed.kind === 'reference')
    return gainAndOffset(gain, { symbolic: 'Vref', numeric: voltsText(v), value: v })
  const r7 = leg('R7', values.R7, need.reference?.resistance ?? 0, 'Rref')
  const r8 = values.R8 ?? 0
  return gainAndOffset(gain, {
    symbolic: `Vref × R8/(${r7.symbolic} + R8)`,
    numeric: `${voltsText(v)} × ${ohms(r8)}/(${r7.numeric} + ${ohms(r8)})`,
    value: (v * r8) / (r7.value + r8),
  })
}
