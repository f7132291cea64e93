import { compareDrafts, type Difference } from '#shared/design/document-differences.ts'
import { setAt, type DraftDocument } from '#shared/design/document-paths.ts'
import type { Plan } from '#shared/design/plan.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { DesignRefused } from '#shared/design/read.ts'
import { answersOf, type Variant, type VariantAnswer } from './variant-answers.ts'

/*
 * Two variants of a channel side by side: what was edited (causes), which answers moved (effects), and which effect one
 * edit alone explains. An edit explains an effect when it alone, put into the first variant, moves the answer the whole
 * way, and taken back alone from the second moves it the whole way back. Where several edits work together on an answer
 * none of them is named, which is the truth.
 */

/** One edit: a key of the design that differs. */
export interface Cause {
  path: string
  /** What the two variants say; undefined where a side says nothing. */
  a: unknown
  b: unknown
  /** True where this edit alone moves no answer; null where that was not found out. */
  idle: boolean | null
}

/** One answer that moved. */
export interface Effect extends Omit<VariantAnswer, 'value' | 'better'> {
  a: number | string | null
  b: number | string | null
  /** b − a; null where either is no number. */
  change: number | null
  direction: 'up' | 'down' | 'changed' | 'added' | 'removed'
  /** Whether the second is the better one; null where neither is. */
  better: boolean | null
}

export interface Comparison {
  causes: Cause[]
  effects: Effect[]
  /** Effects that one edit alone explains. */
  links: { path: string; effect: string }[]
  /** Edits that were not tried alone: beyond the bound, or no design results. */
  untried: number
}

export interface CompareOptions {
  /** Edits tried alone, each at the cost of two plans. */
  most?: number
  /** Told after each edit that was tried. */
  onProgress?: (done: number, of: number) => void
}

const MOST = 12

/** Compares `a` (as it was) with `b` (as it would be). Pure; takes as long as two plans an edit. */
export function compareVariants(a: Variant, b: Variant, options: CompareOptions = {}): Comparison {
  const { most = MOST, onProgress = () => undefined } = options
  const differences = compareDrafts(a.document, b.document)
  const before = answersOf(a)
  const after = answersOf(b)
  const effects = effectsOf(before, after)
  const links: Comparison['links'] = []
  let untried = Math.max(0, differences.length - most)
  const causes = differences.map((difference, at): Cause => {
    const cause = { path: difference.path, a: difference.mine, b: difference.theirs, idle: null }
    if (at >= most) return cause
    // A single edit is the whole way from one variant to the other: nothing has to be tried.
    const alone =
      differences.length === 1 ? after : answersWith(a.document, difference.path, difference.theirs)
    const without =
      differences.length === 1 ? before : answersWith(b.document, difference.path, difference.mine)
    onProgress(at + 1, Math.min(differences.length, most))
    if (!alone || !without) {
      untried += 1
      return cause
    }
    const forth = new Set(effectsOf(before, alone).map(({ id }) => id))
    const back = new Set(effectsOf(without, after).map(({ id }) => id))
    for (const { id } of effects)
      if (forth.has(id) && back.has(id) && sameAt(id, alone, after) && sameAt(id, without, before))
        links.push({ path: difference.path, effect: id })
    return { ...cause, idle: forth.size === 0 && back.size === 0 }
  })
  return { causes, effects, links, untried }
}

/** The answers of a document with one key changed; null where that is no design. */
function answersWith(
  document: DraftDocument,
  path: string,
  value: Difference['mine'],
): VariantAnswer[] | null {
  const changed = setAt(document, path, value)
  const plan = planOf(changed)
  return plan && answersOf({ document: changed, plan })
}

function planOf(document: DraftDocument): Plan | null {
  try {
    return planDesign(document)
  } catch (error) {
    if (error instanceof DesignRefused) return null
    throw error
  }
}

/** Relative change below which two figures are the same: plans are printed to 12 digits. */
const SAME = 1e-9

function isSame(a: VariantAnswer['value'], b: VariantAnswer['value']): boolean {
  if (typeof a !== 'number' || typeof b !== 'number') return a === b
  return Math.abs(a - b) <= SAME * Math.max(Math.abs(a), Math.abs(b))
}

const valueOf = (answers: readonly VariantAnswer[], id: string): VariantAnswer['value'] =>
  answers.find((answer) => answer.id === id)?.value ?? null

const sameAt = (id: string, a: readonly VariantAnswer[], b: readonly VariantAnswer[]): boolean =>
  isSame(valueOf(a, id), valueOf(b, id))

/** Answers that differ, in the order of the second variant; what only the first has follows. */
function effectsOf(before: readonly VariantAnswer[], after: readonly VariantAnswer[]): Effect[] {
  const known = new Set(after.map(({ id }) => id))
  return [...after, ...before.filter(({ id }) => !known.has(id))].flatMap((answer) => {
    const [a, b] = [valueOf(before, answer.id), valueOf(after, answer.id)]
    return isSame(a, b) ? [] : [toEffect(answer, a, b)]
  })
}

function toEffect(
  { id, label, unit, display, better }: VariantAnswer,
  a: VariantAnswer['value'],
  b: VariantAnswer['value'],
): Effect {
  const change = typeof a === 'number' && typeof b === 'number' ? b - a : null
  const direction =
    change !== null ? (change > 0 ? 'up' : 'down') : a === null ? 'added' : b === null ? 'removed' : 'changed'
  return {
    id,
    label,
    unit,
    display,
    a,
    b,
    change,
    direction,
    better: better === null || change === null ? null : change > 0 === (better === 'more'),
  }
}
