import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatRange } from '#shared/units/format-quantity.ts'
import { sentence } from './figures.ts'
import type { NoteContext, NoteStatus } from './types.ts'

/** Sentences that say what the note is about. */

export const statusWords: Record<NoteStatus, string> = {
  draft: 'Draft',
  'in review': 'In review',
  released: 'Released',
  superseded: 'Superseded',
}

/** What stands in the head of every sheet until a note is released. */
export function toMark(status: NoteStatus): string | null {
  if (status === 'released') return null
  return status === 'superseded' ? 'Superseded, not for manufacture' : 'Draft, not for manufacture'
}

export function toNumberLine(context: NoteContext): string {
  const number = context.number ? `Design note ${context.number}` : 'Design note, not numbered'
  return context.revision ? `${number}, revision ${context.revision}` : number
}

/** Where the signal comes from, what it stands for and where it goes. */
export function toPurpose(design: Design, plan: Plan, stands: boolean): string {
  const { quantity } = design.sensor
  const input = design.converter.input
  const signal = formatRange(plan.required.sensor.low, plan.required.sensor.high, plan.required.per)
  const measurand = formatRange(quantity.low, quantity.high, quantity.unit)
  const target = formatRange(input.low, input.high, 'V')
  const what = `${sourceWords(design)} of ${signal}, for ${quantity.name.toLowerCase()} from ${measurand}`
  const into = `a ${design.converter.bits} bit converter that takes ${target}`
  return stands
    ? `How a ${what}, is brought to ${into}, with the room that is left at every node of every board, and where it clips.`
    : `Asked for: a ${what}, onto ${into}.`
}

function sourceWords(design: Design): string {
  if (design.sensor.kind === 'bridge') return 'bridge signal'
  return design.sensor.wiring === 'differential' ? 'differential voltage' : 'voltage'
}

/** The sentence that comes first when nothing can be built, with its reasons; null for a plan that stands. */
export function toRefusal(
  plan: Plan,
  candidate: Candidate | null,
): { text: string; reasons: string[] } | null {
  if (candidate?.feasible) return null
  const tried = plan.candidates.length
  if (candidate)
    return {
      text: `This design cannot be built as it stands. The chosen arrangement, ${candidate.title.toLowerCase()}, is not possible here.`,
      reasons: uniqueSentences([
        ...candidate.reasons.map((r) => r.text),
        ...(candidate.findings ?? []).filter((f) => f.severity === 'over').map((f) => f.text),
      ]),
    }
  return {
    text: `No arrangement can do this. ${tried === 1 ? 'One was' : `${tried} were`} considered; what stands in the way of each is listed under candidates considered.`,
    reasons: uniqueSentences([
      ...plan.findings.map((f) => f.text),
      ...plan.candidates.flatMap((c) => c.reasons.slice(0, 1).map((r) => `${c.title}: ${r.text}`)),
    ]),
  }
}

function uniqueSentences(texts: string[]): string[] {
  return [...new Set(texts.map(sentence))]
}

/** Supplies and references beside the schematic's heading. */
export function toSupplyLine(design: Design): string {
  const { positive, negative } = design.rails
  const rails =
    negative === 0
      ? `supply ${formatRange(0, positive, 'V').split(' to ')[1] ?? ''}`
      : `supplies ${formatRange(negative, positive, 'V')}`
  return `${rails}, decoupling not shown`
}
