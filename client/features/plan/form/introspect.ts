import { z } from 'zod'
import { designSchema } from '#shared/design/schema.ts'
import { fieldMeta } from '#shared/units/fields.ts'
import { getAt, type DraftDocument } from '../draft/paths.ts'
import { hasOwnLabel, labelOf } from './labels.ts'

/**
 * What a form needs to know of a key of the design, read from the design's own schema. A new key, or a whole new
 * sensor kind, gets its control from here without any code of the form.
 */
interface Common {
  /** Dotted path into the design. */
  path: string
  label: string
  /** True where a design without this key is refused. */
  required: boolean
  /** What the schema puts in where the key is absent. */
  preset: unknown
}

export type FieldSpec = Common &
  (
    | { control: 'number'; unit: string; accepted: string; display: 'percent' | 'plain' }
    | { control: 'choice'; options: readonly string[] }
    | { control: 'flag' }
    | { control: 'text'; longest: number }
    | { control: 'numbers'; unit: string; longest: number }
    | { control: 'table'; columns: readonly { label: string; unit: string }[]; longest: number }
    | { control: 'group'; fields: readonly FieldSpec[] }
    | { control: 'none' }
  )

export type ControlName = FieldSpec['control']

interface Unwrapped {
  schema: z.core.$ZodType
  required: boolean
  preset: unknown
}

/** Takes off optional, default and prefault. */
function unwrap(schema: z.core.$ZodType): Unwrapped {
  if (schema instanceof z.ZodOptional) return { ...unwrap(schema.unwrap()), required: false }
  if (schema instanceof z.ZodDefault || schema instanceof z.ZodPrefault) {
    const preset: unknown = schema.def.defaultValue
    return { ...unwrap(schema.unwrap()), required: false, preset }
  }
  return { schema, required: true, preset: undefined }
}

/** Of several forms of one key (`excitation`: a number or an object) the form edits the richest: the object. */
function richest(options: readonly z.core.$ZodType[]): z.core.$ZodType | undefined {
  return options.find((option) => option instanceof z.ZodObject) ?? options[0]
}

export function specOf(path: string, wrapped: z.core.$ZodType): FieldSpec {
  const { schema, required, preset } = unwrap(wrapped)
  const common: Common = { path, label: labelOf(path), required, preset }
  if (schema instanceof z.ZodNumber) {
    const meta = fieldMeta.get(schema)
    return {
      ...common,
      control: 'number',
      label: hasOwnLabel(path) ? common.label : (meta?.label ?? common.label),
      unit: meta?.unit ?? '',
      accepted: meta?.accepted ?? 'a number',
      display: meta?.display ?? 'plain',
    }
  }
  if (schema instanceof z.ZodEnum)
    return { ...common, control: 'choice', options: schema.options.map(String) }
  if (schema instanceof z.ZodBoolean) return { ...common, control: 'flag' }
  if (schema instanceof z.ZodString) return { ...common, control: 'text', longest: schema.maxLength ?? 200 }
  if (schema instanceof z.ZodArray) return listSpec(common, schema)
  if (schema instanceof z.ZodObject)
    return {
      ...common,
      control: 'group',
      fields: Object.entries(schema.shape as Record<string, z.core.$ZodType>)
        .map(([key, inner]) => specOf(path ? `${path}.${key}` : key, inner))
        .filter((spec) => spec.control !== 'none'),
    }
  if (schema instanceof z.ZodUnion) {
    const option = richest(schema.options)
    return option ? { ...specOf(path, option), required, preset } : { ...common, control: 'none' }
  }
  return { ...common, control: 'none' }
}

function listSpec(common: Common, schema: z.ZodArray): FieldSpec {
  const longest = schema.def.checks?.map(maximumOf).find((limit) => limit !== null) ?? 100
  const { schema: element } = unwrap(schema.element)
  if (element instanceof z.ZodNumber)
    return { ...common, control: 'numbers', unit: fieldMeta.get(element)?.unit ?? '', longest }
  if (element instanceof z.ZodTuple) {
    const columns = element.def.items.map((item) => {
      const column = specOf(common.path, item)
      return { label: column.label, unit: column.control === 'number' ? column.unit : '' }
    })
    return { ...common, label: columns.at(-1)?.label ?? common.label, control: 'table', columns, longest }
  }
  return { ...common, control: 'none' }
}

function maximumOf(check: z.core.$ZodCheck): number | null {
  const def = check._zod.def as { check: string; maximum?: number }
  return def.check === 'max_length' && def.maximum !== undefined ? def.maximum : null
}

/** Schema of the sensor with this `kind`; the first of the list where the kind is not known. */
function sensorSchemaOf(kind: string): z.core.$ZodType | undefined {
  const union = unwrap(designSchema.shape.sensor).schema
  if (!(union instanceof z.ZodUnion)) return undefined
  const options: readonly z.core.$ZodType[] = union.options
  return (
    options.find((option) => {
      if (!(option instanceof z.ZodObject)) return false
      const literal = (option.shape as Record<string, unknown>).kind
      return literal instanceof z.ZodLiteral && literal.value === kind
    }) ?? options[0]
  )
}

const specs = new Map<string, FieldSpec>()

/** The specification of a key of the design, `sensor.output.low`, for a sensor of that kind. */
export function fieldAt(path: string, sensorKind: string): FieldSpec {
  const key = `${sensorKind}:${path}`
  const known = specs.get(key)
  if (known) return known
  let schema: z.core.$ZodType | undefined = designSchema
  for (const [index, part] of path.split('.').entries()) {
    schema = schema && step(schema, part)
    if (index === 0 && part === 'sensor') schema = sensorSchemaOf(sensorKind)
  }
  if (!schema) throw new RangeError(`The design has no key ${path}.`)
  const spec = specOf(path, schema)
  specs.set(key, spec)
  return spec
}

function step(wrapped: z.core.$ZodType, key: string): z.core.$ZodType | undefined {
  const { schema } = unwrap(wrapped)
  if (schema instanceof z.ZodObject) return (schema.shape as Record<string, z.core.$ZodType>)[key]
  if (schema instanceof z.ZodArray) return schema.element
  if (schema instanceof z.ZodRecord) return schema.valueType
  if (schema instanceof z.ZodUnion) {
    const option = richest(schema.options)
    return option && step(option, key)
  }
  return undefined
}

/**
 * Whether a draft has to answer this key: the design is refused without it, and every group around it is either
 * required as well or already begun.
 */
export function isAsked(spec: FieldSpec, sensorKind: string, document: DraftDocument): boolean {
  if (!spec.required) return false
  const keys = spec.path.split('.')
  return keys.slice(0, -1).every((_, index) => {
    const around = keys.slice(0, index + 1).join('.')
    return getAt(document, around) !== undefined || fieldAt(around, sensorKind).required
  })
}

/** Every single field at or under a specification, groups taken apart. */
export function leavesOf(spec: FieldSpec): FieldSpec[] {
  return spec.control === 'group' ? spec.fields.flatMap(leavesOf) : [spec]
}
