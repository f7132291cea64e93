import type { Candidate, PickEntry, Plan } from '#shared/design/plan.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { NONE, sentence } from './figures.ts'
import type { Row, Table } from './types.ts'

/** All arrangements that were considered, the chosen one first, each with what speaks for or against it. */
export function toCandidatesTable(plan: Plan): Table {
  const order = plan.candidates.map((candidate, index) => ({ candidate, index }))
  const rank = (entry: (typeof order)[number]) =>
    entry.index === plan.chosen ? 0 : entry.candidate.feasible ? 1 : 2
  order.sort((a, b) => rank(a) - rank(b) || a.index - b.index)
  return {
    columns: [
      { title: 'Arrangement', share: 27, strong: true },
      { title: 'Verdict', share: 11 },
      { title: 'Parts', share: 7, align: 'right' },
      { title: 'Amplifiers', share: 10, align: 'right' },
      { title: 'Codes lost', share: 10, align: 'right' },
      { title: 'Why', share: 46 },
    ],
    rows: order.map(({ candidate, index }): Row => {
      const { ranking } = candidate
      return {
        cells: [
          candidate.title,
          index === plan.chosen ? 'chosen' : candidate.feasible ? 'possible' : 'not possible',
          ranking ? String(ranking.parts) : NONE,
          ranking ? String(ranking.amplifiers) : NONE,
          ranking ? formatQuantity(Math.round(ranking.codesLost), '', { digits: 12 }) : NONE,
          why(candidate),
        ],
      }
    }),
  }
}

function why(candidate: Candidate): string {
  const reasons = candidate.reasons.map((reason) => sentence(reason.text))
  if (candidate.ranking?.text && candidate.feasible) reasons.push(sentence(candidate.ranking.text))
  return reasons.length > 0 ? [...new Set(reasons)].join(' ') : NONE
}

const PICKS = 6

/** The best few sets of standard values for the chosen arrangement. */
export function toPicksTable(candidate: Candidate): Table | null {
  const picks = candidate.picks ?? []
  if (picks.length < 2) return null
  const chosen = candidate.pick ?? 0
  const shown = picks
    .map((pick, index) => ({ pick, index }))
    .filter((p) => p.index < PICKS || p.index === chosen)
  const refs = Object.keys(picks[0]?.values ?? {})
  return {
    columns: [
      { title: 'Values', share: 62, strong: true },
      { title: 'End-point error', share: 18, align: 'right' },
      { title: 'Different values', share: 16, align: 'right' },
      { title: 'Verdict', share: 16 },
    ],
    rows: shown.map(({ pick, index }): Row => ({
      cells: [
        refs.map((ref) => valueText(candidate, pick, ref)).join(', '),
        `${formatQuantity(pick.error * 1e6, '', { digits: 3, rounding: 'outward' })} ppm`,
        String(pick.distinct),
        index === chosen ? 'chosen' : pick.practical ? 'as good' : 'worse',
      ],
    })),
  }
}

function valueText(candidate: Candidate, pick: PickEntry, ref: string): string {
  const name = toDrawnRef(candidate, ref)
  const kind = candidate.components?.find((component) => component.ref === name)?.kind
  return `${name} ${toRkm(pick.values[ref] ?? Number.NaN, kind === 'capacitor' ? 'F' : 'Ω')}`
}

/** Parts of a second stage carry a B in the drawing; its own equations and picks leave it out. */
export function toDrawnRef(candidate: Candidate, ref: string): string {
  const drawn = `${ref}B`
  const isDrawn = (candidate.stages?.length ?? 1) > 1 && candidate.components?.some((c) => c.ref === drawn)
  return isDrawn ? drawn : ref
}
