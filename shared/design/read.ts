import type { z } from 'zod'
import { kindOf } from '#shared/sensors/index.ts'
import { fieldMeta } from '#shared/units/fields.ts'
import type { Fault } from './plan.ts'
import { designSchema, type Design, type DesignDocument } from './schema.ts'

export type ReadResult =
  { ok: true; document: DesignDocument; design: Design } | { ok: false; faults: Fault[] }

/** Thrown where a document that is not a design reaches the engine all the same. */
export class DesignRefused extends Error {
  constructor(readonly faults: Fault[]) {
    super(faults.map((f) => `${f.path}: ${f.reason}; accepted: ${f.accepted}`).join('\n'))
    this.name = 'DesignRefused'
  }
}

/**
 * Reads a design document: every fault with its path, reason and what is accepted. `document` is what was given
 * (before defaults), `design` the same with every default put in.
 */
export function readDesign(given: unknown): ReadResult {
  const version = versionFault(given)
  if (version) return { ok: false, faults: [version] }
  const parsed = designSchema.safeParse(given)
  if (!parsed.success)
    return { ok: false, faults: parsed.error.issues.flatMap((issue) => toFaults(issue, given)) }
  const faults = crossFaults(parsed.data)
  if (faults.length > 0) return { ok: false, faults }
  // The schema has just accepted it, so it is a document.
  return { ok: true, document: given as DesignDocument, design: parsed.data }
}

const FORMAT = 'spandrel-design/1'

function versionFault(given: unknown): Fault | null {
  if (typeof given !== 'object' || given === null || Array.isArray(given))
    return {
      path: '',
      reason: 'this is not a design file',
      accepted: `a JSON object with "format": "${FORMAT}"`,
    }
  const format = (given as { format?: unknown }).format
  if (format === FORMAT) return null
  const newer = typeof format === 'string' && /^spandrel-design\/(\d+)$/.exec(format)
  return {
    path: 'format',
    reason: newer ? `${String(format)} is newer than this version reads` : 'the format is missing or unknown',
    accepted: `"${FORMAT}"`,
  }
}

type Issue = z.core.$ZodIssue

const joinPath = (path: readonly PropertyKey[]): string =>
  path
    .map((key) => (typeof key === 'number' ? `[${key}]` : String(key)))
    .join('.')
    .replaceAll('.[', '[')

function toFaults(issue: Issue, given: unknown): Fault[] {
  const path = joinPath(issue.path)
  const value = valueAt(given, issue.path)
  const meta = metaAt(issue.path, given)
  switch (issue.code) {
    case 'unrecognized_keys':
      return issue.keys.map((key) => ({
        path: joinPath([...issue.path, key]),
        reason: 'this key is not known',
        accepted: 'the keys of the design format; free text goes under notes',
      }))
    case 'invalid_union':
      return [unionFault(issue, path)]
    case 'invalid_value':
      return [
        {
          path,
          reason: value === undefined ? 'it is missing' : `${show(value)} is not one of the choices`,
          accepted: issue.values.map((v) => JSON.stringify(v)).join(', '),
        },
      ]
    default:
      return [
        {
          path,
          reason: reasonOf(issue, value, meta?.label),
          accepted: meta?.accepted ?? acceptedOf(issue),
        },
      ]
  }
}

function unionFault(issue: Issue & { code: 'invalid_union' }, path: string): Fault {
  if ('discriminator' in issue && typeof issue.discriminator === 'string') {
    const kinds = ['voltage', 'bridge'].map((k) => `"${k}"`).join(', ')
    return { path: path || 'sensor.kind', reason: 'the sensor kind is missing or not known', accepted: kinds }
  }
  return {
    path,
    reason: 'it has neither of the accepted forms',
    accepted: 'a number in V, or an object with voltage',
  }
}

function reasonOf(issue: Issue, value: unknown, label: string | undefined): string {
  const name = label ? `${label.toLowerCase()} ` : ''
  if (value === undefined) return `${name}is missing`.trimStart()
  if (typeof value === 'number' && Number.isNaN(value)) return `${name}is not a number`
  if (value === Infinity || value === -Infinity) return `${name}is infinite`
  if (issue.code === 'invalid_type') return `${name}has the wrong type: ${show(value)}`
  return `${name}is ${show(value)}`
}

function acceptedOf(issue: Issue): string {
  if (issue.code === 'too_small')
    return `at least ${String(issue.minimum)} ${issue.origin === 'string' ? 'characters' : ''}`.trim()
  if (issue.code === 'too_big')
    return `at most ${String(issue.maximum)} ${issue.origin === 'string' ? 'characters' : ''}`.trim()
  if (issue.code === 'invalid_type') return issue.expected === 'object' ? 'an object' : `a ${issue.expected}`
  return issue.message
}

const show = (value: unknown): string => {
  const text = JSON.stringify(value) ?? String(value)
  return text.length > 40 ? `${text.slice(0, 37)}…` : text
}

function valueAt(given: unknown, path: readonly PropertyKey[]): unknown {
  let at: unknown = given
  for (const key of path) {
    if (typeof at !== 'object' || at === null) return undefined
    at = (at as Record<PropertyKey, unknown>)[key]
  }
  return at
}

/** What a schema node may carry of others, as far as a walk by path needs it. */
interface SchemaNode {
  shape?: Record<string, SchemaNode>
  options?: readonly SchemaNode[]
  element?: SchemaNode
  def: { innerType?: SchemaNode; valueType?: SchemaNode; items?: readonly SchemaNode[] }
}

/** Label, unit and accepted range of the field at a path, found by walking the schema. */
export function metaAt(path: readonly PropertyKey[], given?: unknown) {
  let node: SchemaNode | undefined = designSchema as unknown as SchemaNode
  let at: unknown = given
  for (const key of path) {
    node = unwrap(node)
    if (node?.options) {
      const holder = node.options.find((option) => matches(unwrap(option), at))
      node = unwrap(holder)
    }
    if (node?.shape) node = node.shape[String(key)]
    else if (node?.element) node = node.element
    else if (node?.def.items && typeof key === 'number') node = node.def.items[key]
    else node = node?.def.valueType
    at = typeof at === 'object' && at !== null ? (at as Record<PropertyKey, unknown>)[key] : undefined
  }
  node = unwrap(node)
  return node ? fieldMeta.get(node as never) : undefined
}

function unwrap(node: SchemaNode | undefined): SchemaNode | undefined {
  let at = node
  while (at?.def.innerType) at = at.def.innerType
  return at
}

/** Picks the member of a union by its `kind`, or by being an object where the value is one. */
function matches(option: SchemaNode | undefined, value: unknown): boolean {
  if (!option) return false
  if (typeof value !== 'object' || value === null) return !option.shape
  const kind = option.shape?.kind as { def?: { values?: unknown[] } } | undefined
  if (!kind) return Boolean(option.shape)
  return kind.def?.values?.includes((value as { kind?: unknown }).kind) ?? false
}

/** Faults that no single field shows. */
function crossFaults(design: Design): Fault[] {
  const faults: Fault[] = []
  const add = (path: string, reason: string, accepted: string) => faults.push({ path, reason, accepted })
  const { sensor, converter, rails, shiftReference, temperature, parts } = design
  if (sensor.quantity.low === sensor.quantity.high)
    add('sensor.quantity.high', 'the measurand has no span: low and high are equal', 'two different values')
  for (const fault of kindOf(sensor).check(sensor)) faults.push({ ...fault, path: `sensor.${fault.path}` })
  if (sensor.temperature && sensor.temperature.low > sensor.temperature.high)
    add('sensor.temperature.high', 'the range is reversed', `${sensor.temperature.low} °C or more`)
  if (converter.input.low >= converter.input.high)
    add(
      'converter.input.high',
      'the converter range is empty or reversed',
      `a voltage above ${converter.input.low}, in V`,
    )
  if (converter.guard && converter.guard.low + converter.guard.high >= 1)
    add(
      'converter.guard',
      'the guard bands meet: nothing of the range is left',
      'two fractions with a sum below 1',
    )
  if (rails.negative >= rails.positive)
    add('rails.positive', 'the rails are reversed or equal', `a voltage above ${rails.negative}, in V`)
  const { reference } = converter
  if (reference?.same === 'positive' && reference.voltage !== rails.positive)
    add(
      'converter.reference.voltage',
      `the reference is the positive rail, yet ${reference.voltage} V is not ${rails.positive} V`,
      `${rails.positive}, in V, or leave same out`,
    )
  if (reference?.same === 'converter' || reference?.same === 'shift')
    add(
      'converter.reference.same',
      'the converter reference can only be the positive rail',
      '"positive", or leave it out',
    )
  if (shiftReference) {
    const { same, voltage } = shiftReference
    if (same === 'converter' && !reference)
      add('shiftReference.same', 'the converter names no reference to share', 'give converter.reference')
    if (same === 'shift')
      add('shiftReference.same', 'a reference cannot be itself', '"converter" or "positive"')
    const shared =
      same === 'converter' ? reference?.voltage : same === 'positive' ? rails.positive : undefined
    if (shared !== undefined && voltage !== undefined && voltage !== shared)
      add(
        'shiftReference.voltage',
        `it is the same source, yet ${voltage} V is not ${shared} V`,
        `${shared}, in V, or leave it out`,
      )
    if (!same && voltage === undefined)
      add('shiftReference.voltage', 'the reference has no voltage', 'a number above 0, in V')
  }
  if (temperature.low > temperature.high)
    add('temperature.high', 'the temperature range is reversed', `${temperature.low} °C or more`)
  if (parts.resistors.minimum > parts.resistors.maximum)
    add('parts.resistors.maximum', 'the window is reversed', `${parts.resistors.minimum} or more, in Ω`)
  if (parts.capacitors.minimum > parts.capacitors.maximum)
    add('parts.capacitors.maximum', 'the window is reversed', `${parts.capacitors.minimum} or more, in F`)
  const { absolute } = converter
  if (absolute && absolute.low >= absolute.high)
    add(
      'converter.absolute.high',
      'the absolute limits are reversed',
      `a voltage above ${absolute.low}, in V`,
    )
  const ia = parts.instrumentation
  if (ia.gainMinimum > ia.gainMaximum)
    add('parts.instrumentation.gainMaximum', 'the gain range is reversed', `${ia.gainMinimum} or more`)
  const excitation =
    sensor.kind === 'bridge' && typeof sensor.excitation === 'object' ? sensor.excitation : null
  if (excitation?.same) {
    const shared =
      excitation.same === 'positive'
        ? rails.positive
        : excitation.same === 'converter'
          ? reference?.voltage
          : (shiftReference?.voltage ?? reference?.voltage)
    if (shared === undefined)
      add(
        'sensor.excitation.same',
        'there is no such reference to share',
        'give that reference, or a voltage of its own',
      )
    else if (excitation.voltage !== undefined && excitation.voltage !== shared)
      add(
        'sensor.excitation.voltage',
        `it is the same source, yet ${excitation.voltage} V is not ${shared} V`,
        `${shared}, in V, or leave it out`,
      )
  }
  return faults
}
