/** The eight steps of a plan, in their order. */
export const steps = [
  { id: 'measurand', title: 'Measurand' },
  { id: 'sensor', title: 'Sensor' },
  { id: 'converter', title: 'Converter' },
  { id: 'stages', title: 'Stages' },
  { id: 'parts', title: 'Parts' },
  { id: 'filter', title: 'Filter' },
  { id: 'errors', title: 'Errors' },
  { id: 'review', title: 'Review' },
] as const

export type StepId = (typeof steps)[number]['id']

export const isStep = (text: string | undefined): text is StepId => steps.some((step) => step.id === text)

export const stepNumber = (id: StepId): number => steps.findIndex((step) => step.id === id) + 1

export const stepTitle = (id: StepId): string => steps.find((step) => step.id === id)?.title ?? ''

export function neighbours(id: StepId): { previous: StepId | null; next: StepId | null } {
  const index = steps.findIndex((step) => step.id === id)
  return { previous: steps[index - 1]?.id ?? null, next: steps[index + 1]?.id ?? null }
}

/** Longest beginning wins: `sensor.quantity.low` belongs to the measurand, `sensor.output.low` to the sensor. */
const homes: readonly (readonly [beginning: string, step: StepId])[] = [
  ['name', 'measurand'],
  ['sensor.quantity', 'measurand'],
  ['temperature', 'measurand'],
  ['target', 'measurand'],
  ['sensor', 'sensor'],
  ['converter', 'converter'],
  ['rails', 'converter'],
  ['shiftReference', 'converter'],
  ['choose.arrangement', 'stages'],
  ['choose.stages', 'stages'],
  ['rules.room', 'stages'],
  ['parts', 'parts'],
  ['choose.values', 'parts'],
  ['choose.pick', 'parts'],
  ['choose.filter', 'filter'],
  ['choose.drive', 'filter'],
  ['rules.settling', 'filter'],
  ['rules.aliasAttenuation', 'filter'],
  ['rules.modelError', 'errors'],
  ['calibration', 'errors'],
  ['analysis', 'errors'],
]

/** The step that holds the field of a path. */
export function stepOfPath(path: string): StepId {
  const found = homes
    .filter(([beginning]) => path === beginning || path.startsWith(`${beginning}.`))
    .sort(([a], [b]) => b.length - a.length)[0]
  return found?.[1] ?? 'review'
}

/** Id of the control, or of the group, that belongs to a path. */
export const fieldId = (path: string): string => `field-${path.replaceAll('.', '-')}`
