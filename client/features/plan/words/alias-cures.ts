import type { FilterPlan, FilterResponse } from '#shared/design/plan.ts'
import { responseNames } from '#shared/filters/prototypes.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Change } from '../draft/draft-state.ts'

/** A change that reaches the alias attenuation wanted, with its words. */
export interface AliasCure {
  words: string
  label: string
  changes: Change[]
}

/**
 * What would do: for each response the fewest poles that reach it at this rate, fewest first, and the sample rate at
 * which the filter as it is reaches it. Empty where it is reached already.
 */
export function aliasCures({ alias, kind, order, response, digital }: FilterPlan): AliasCure[] {
  if (!alias || alias.state === 'clear') return []
  const sections = kind === 'multiple-feedback' ? kind : 'sallen-key'
  const byOrder = (Object.entries(alias.orders) as [FilterResponse, number | null][])
    .flatMap(([name, poles]) => (poles === null ? [] : [{ name, poles }]))
    .filter(({ name, poles }) => !(poles === order && name === response))
    .sort((a, b) => a.poles - b.poles)
    .map(({ name, poles }): AliasCure => ({
      words: `Take ${poles === 1 ? 'one pole' : `${poles} poles, ${responseNames[name]}`}`,
      label: 'Order of the filter',
      changes:
        poles === 1
          ? [
              { path: 'choose.filter.kind', value: 'rc' },
              { path: 'choose.filter.response', value: undefined },
              { path: 'choose.filter.order', value: undefined },
            ]
          : [
              { path: 'choose.filter.kind', value: sections },
              { path: 'choose.filter.response', value: name },
              { path: 'choose.filter.order', value: poles },
            ],
    }))
  const rate = alias.rateFor === null ? null : upTo(alias.rateFor)
  return [
    ...byOrder,
    ...(rate === null
      ? []
      : [
          {
            words: `Sample at ${formatQuantity(rate, 'Hz', { digits: 3 })}`,
            label: digital ? 'Modulator rate' : 'Sample rate',
            changes: [{ path: digital ? 'converter.modulatorRate' : 'converter.sampleRate', value: rate }],
          },
        ]),
  ]
}

/** Three digits, never less than what is needed. */
function upTo(rate: number): number {
  const power = 10 ** (Math.floor(Math.log10(rate)) - 2)
  return Number((Math.ceil(rate / power - 1e-9) * power).toPrecision(3))
}
