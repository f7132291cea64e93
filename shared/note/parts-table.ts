import type { Candidate, Component } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { enumerate, NONE, share } from './figures.ts'
import type { Row, Table } from './types.ts'

/** Parts that somebody has to buy: what is fixed by the sensor, the converter or inside a part is left out. */
function isBought(component: Component): boolean {
  return !component.fixed && component.group !== 'internal'
}

/** Wanted, chosen, series and purpose of each part; parts alike in all of these share a line. */
export function toPartsTable(design: Design, candidate: Candidate): Table {
  const rows = new Map<string, { refs: string[]; cells: string[] }>()
  for (const component of candidate.components ?? []) {
    if (!isBought(component) || component.value === undefined) continue
    const unit = component.kind === 'capacitor' ? 'F' : 'Ω'
    const cells = [
      component.sets,
      component.wanted === undefined ? NONE : formatQuantity(component.wanted, unit, { digits: 4 }),
      toRkm(component.value, unit),
      seriesWords(design, component),
    ]
    const key = cells.join('|')
    const row = rows.get(key)
    if (row) row.refs.push(component.ref)
    else rows.set(key, { refs: [component.ref], cells })
  }
  return {
    columns: [
      { title: 'Part', share: 15 },
      { title: 'Sets', share: 30 },
      { title: 'Wanted', share: 17, align: 'right' },
      { title: 'Chosen', share: 14, strong: true },
      { title: 'Series', share: 24 },
    ],
    rows: [...rows.values()].map(({ refs, cells }): Row => ({ cells: [refs.join(', '), ...cells] })),
  }
}

function seriesWords(design: Design, component: Component): string {
  const parts = component.kind === 'capacitor' ? design.parts.capacitors : design.parts.resistors
  const origin = component.chosen ? 'fixed by hand' : parts.stock.length > 0 ? 'from stock' : parts.series
  const tolerance = component.tolerance ?? parts.tolerance
  const limit = tolerance > 0 ? `, ${share(tolerance)}` : ''
  const dielectric = component.kind === 'capacitor' ? `, ${design.parts.capacitors.dielectric}` : ''
  return `${origin}${limit}${dielectric}`
}

/** One line for each amplifier class: "U1, U2: rail-to-rail amplifier, 10 MHz class". */
export function toAmplifierLines(candidate: Candidate): string[] {
  const names = new Map<string, string[]>()
  for (const component of candidate.components ?? []) {
    if (component.kind !== 'amplifier' && component.kind !== 'instrumentation-amplifier') continue
    if (component.group === 'internal') continue
    const name = component.name ?? 'amplifier'
    names.set(name, [...(names.get(name) ?? []), component.ref])
  }
  return [...names].map(([name, refs]) => `${enumerate(refs)}: ${name}`)
}

/** How the chosen values compare with the best that the allowed values could do. */
export function toPickSentence(design: Design, candidate: Candidate): string | null {
  const chosen = candidate.picks?.[candidate.pick ?? 0]
  if (!chosen || !candidate.optimum) return null
  const allowed = design.parts.resistors.stock.length > 0 ? 'the stock' : design.parts.resistors.series
  const ppm = (fraction: number) => `${formatQuantity(fraction * 1e6, '', { digits: 3 })} ppm`
  return (
    `The values miss the ideal end points by ${ppm(chosen.error)} of the target span; the best that ${allowed} ` +
    `holds is ${ppm(candidate.optimum.error)}, and the resistors' own tolerance moves an end by up to ` +
    `${ppm(candidate.optimum.toleranceError)}.`
  )
}
