import type { FilterPlan, Finding } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { MOST_POLES, responseNames, responses } from './prototypes.ts'
import { rateForSixPoles } from './wish.ts'

/** Gain-bandwidth wanted of a section's amplifier over Q·f0, times its noise gain (method: amplifier need). */
const GBW_RATIO = 100
/** A section of fixed values that misses its f0 or Q by more is told, fraction. */
const MISSED = 0.02
/** Beyond this it is another filter, fraction. */
const FAR = 0.1
/** The drive of an even order is to lie this far above the corner. */
const DRIVE_RATIO = 10

const decibels = (x: number, rounding: 'up' | 'down') => formatQuantity(x, 'dB', { digits: 3, rounding })
const hertz = (f: number, rounding: 'up' | 'down' = 'up') => formatQuantity(f, 'Hz', { digits: 3, rounding })
const percent = (x: number) => formatQuantity(x, '', { digits: 2, display: 'percent', rounding: 'up' })

/** Gain-bandwidth product that a section asks of its amplifier, Hz: 100·Q·f0, twice that where it inverts. */
export const gbwNeeded = (kind: FilterPlan['kind'], f0: number, q: number): number =>
  GBW_RATIO * Math.max(q, Math.SQRT1_2) * f0 * (kind === 'multiple-feedback' ? 2 : 1)

/** What is to be said about a filter, with the field that changes it. */
export function filterFindings(design: Design, filter: FilterPlan): Finding[] {
  return [
    ...aliasFindings(design, filter),
    ...amplifierFindings(design, filter),
    ...valueFindings(design, filter),
    ...choiceFindings(design, filter),
  ]
}

function aliasFindings(design: Design, { alias, kind }: FilterPlan): Finding[] {
  if (!alias || alias.state === 'clear') return []
  const stated = design.rules.aliasAttenuation !== undefined
  const { frequency, wanted, reached, rateFor } = alias
  const reaching = responses.flatMap((response) => {
    const order = alias.orders[response]
    return order === null ? [] : [{ response, order }]
  })
  const fewest = reaching.reduce<(typeof reaching)[number] | null>(
    (best, one) => (best === null || one.order < best.order ? one : best),
    null,
  )
  const sixAt = rateForSixPoles(design, 'butterworth')
  const cure = fewest
    ? `${fewest.order === 1 ? 'One pole' : `${fewest.order} poles`} (${responseNames[fewest.response]}) would reach it`
    : `${MOST_POLES} poles do not reach it at this rate${sixAt === null ? '' : `; from ${hertz(sixAt)} on they would`}`
  const faster = rateFor === null ? '' : ` The filter as it is would reach it at ${hertz(rateFor)}.`
  return [
    {
      code: 'alias-short',
      severity: stated ? 'over' : 'caution',
      place: 'adc',
      path: kind === 'none' || stated ? 'choose.filter' : 'rules.aliasAttenuation',
      text: `${hertz(frequency, 'down')} folds into the band with ${decibels(reached, 'down')} of attenuation; ${decibels(wanted, 'up')} ${stated ? 'are asked for' : 'would bring a full-scale interferer under one code'}. ${cure}.${faster}`,
      numbers: {
        frequency,
        wanted,
        reached,
        ...(rateFor === null ? {} : { rateFor }),
        ...(sixAt === null ? {} : { sixAt }),
      },
    },
  ]
}

function amplifierFindings(design: Design, { sections, kind }: FilterPlan): Finding[] {
  const { gbw, name } = design.parts.amplifier
  const short = sections.flatMap(({ ref, wanted }) => {
    if (wanted.q === null) return []
    const needed = gbwNeeded(kind, wanted.f0, wanted.q)
    return needed > gbw ? [{ ref, needed }] : []
  })
  const worst = short.reduce<(typeof short)[number] | null>(
    (most, one) => (most === null || one.needed > most.needed ? one : most),
    null,
  )
  if (!worst) return []
  return [
    {
      code: 'filter-gbw',
      severity: 'caution',
      place: worst.ref,
      path: 'parts.amplifier.gbw',
      text: `Section ${worst.ref} asks for a gain-bandwidth product of ${hertz(worst.needed)}; ${name} has ${hertz(gbw, 'down')}. Its f0, Q and stop band in the network are those printed; a faster amplifier or a lower corner brings them nearer to the ideal.`,
      numbers: { needed: worst.needed, gbw },
    },
  ]
}

/** Fixed values that miss their section, and a drive that takes part in the response. */
function valueFindings(
  design: Design,
  { sections, corner, resistance, capacitance, kind, order }: FilterPlan,
): Finding[] {
  const list = sections.flatMap(({ ref, wanted, values, parts }): Finding[] => {
    const fixed = Object.keys(parts).filter((part) => design.choose.values?.[part] !== undefined)
    const off = Math.max(
      Math.abs(values.f0 / wanted.f0 - 1),
      wanted.q === null || values.q === null ? 0 : Math.abs(values.q / wanted.q - 1),
    )
    if (off < MISSED) return []
    if (fixed.length === 0)
      return [
        {
          code: 'filter-values',
          severity: off > FAR ? 'over' : 'caution',
          place: ref,
          path: 'parts.capacitors',
          text: `No allowed values bring ${ref === 'R9' ? 'the last pole' : `section ${ref} of the filter`} nearer than ${percent(off)} to its frequency or Q. Allow more capacitors, or a wider window of resistors.`,
          numbers: { off },
        },
      ]
    return [
      {
        code: 'filter-fixed-values',
        severity: 'info',
        place: ref,
        path: `choose.values.${fixed[0] ?? ''}`,
        text: `The fixed values are obeyed: with them ${ref === 'R9' ? 'the last pole' : `section ${ref} of the filter`} misses its frequency or Q by ${percent(off)}.`,
        numbers: { off },
      },
    ]
  })
  const own = resistance * capacitance > 0 ? 1 / (2 * Math.PI * resistance * capacitance) : Infinity
  const active = kind === 'sallen-key' || kind === 'multiple-feedback'
  if (active && order % 2 === 0 && corner > 0 && own < DRIVE_RATIO * corner)
    list.push({
      code: 'filter-drive',
      severity: 'caution',
      place: 'adc',
      path: 'choose.drive',
      text: `R9 and C9 have their own corner at ${hertz(own, 'down')}, under ten times that of the filter: they take part in its response. A smaller C9 or R9 moves them away.`,
      numbers: { own, corner },
    })
  return list
}

/** What a person chose that has no effect. */
function choiceFindings(design: Design, filter: FilterPlan): Finding[] {
  const chosen = design.choose.filter
  if (!chosen) return []
  const info = (path: string, text: string): Finding => ({
    code: 'unused-choice',
    severity: 'info',
    place: 'adc',
    path,
    text,
    numbers: {},
  })
  const list: Finding[] = []
  if (filter.kind === 'rc' && chosen.kind !== 'rc')
    list.push(info('choose.filter.kind', 'One pole needs no amplifier: R9 and C9 alone are the filter.'))
  if (chosen.kind === 'rc' && (chosen.order ?? 1) > 1)
    list.push(
      info(
        'choose.filter.order',
        `R9 and C9 are one pole: an order of ${chosen.order ?? 1} has no effect. Take sallen-key or multiple-feedback sections.`,
      ),
    )
  if (filter.kind === 'rc' && chosen.response !== undefined)
    list.push(info('choose.filter.response', 'One pole has but one response: the one chosen has no effect.'))
  return list
}
