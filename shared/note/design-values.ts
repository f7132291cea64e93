import type { z } from 'zod'
import { designSchema, type Design, type DesignDocument } from '#shared/design/schema.ts'
import { fieldMeta } from '#shared/units/fields.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import type { ValueGroup, ValueRow } from './types.ts'

/** Every value of the design with its default put in, grouped as in the design file; given values are marked. */
export function toDesignValues(document: DesignDocument, design: Design): ValueGroup[] {
  const groups: ValueGroup[] = []
  for (const { title, path } of groupsOf) {
    const value = at(design, path)
    if (value === undefined) continue
    const rows: ValueRow[] = []
    collect(rows, path, value, document)
    if (rows.length > 0) groups.push({ title, rows })
  }
  return groups
}

const groupsOf: { title: string; path: string[] }[] = [
  { title: 'Design', path: ['name'] },
  { title: 'Sensor', path: ['sensor'] },
  { title: 'Converter', path: ['converter'] },
  { title: 'Rails', path: ['rails'] },
  { title: 'Shift reference', path: ['shiftReference'] },
  { title: 'Resistors', path: ['parts', 'resistors'] },
  { title: 'Capacitors', path: ['parts', 'capacitors'] },
  { title: 'Amplifier', path: ['parts', 'amplifier'] },
  { title: 'Instrumentation amplifier', path: ['parts', 'instrumentation'] },
  { title: 'Temperature', path: ['temperature'] },
  { title: 'Target', path: ['target'] },
  { title: 'Rules', path: ['rules'] },
  { title: 'Calibration', path: ['calibration'] },
  { title: 'Analysis', path: ['analysis'] },
  { title: 'Chosen by hand', path: ['choose'] },
  { title: 'Remarks', path: ['notes'] },
]

type Unknown = Record<string, unknown>

function at(source: unknown, path: readonly string[]): unknown {
  return path.reduce<unknown>(
    (value, key) => (typeof value === 'object' && value !== null ? (value as Unknown)[key] : undefined),
    source,
  )
}

function collect(rows: ValueRow[], path: string[], value: unknown, document: DesignDocument): void {
  if (value === undefined) return
  if (typeof value === 'object' && value !== null && !Array.isArray(value)) {
    for (const [key, inner] of Object.entries(value)) collect(rows, [...path, key], inner, document)
    return
  }
  rows.push({
    label: labelOf(path, document),
    value: textOf(path, value, document),
    given: at(document, path) !== undefined,
  })
}

/** `parts.resistors.tolerance` → "Resistor tolerance" where the schema names it, else the last keys in words. */
function labelOf(path: string[], document: DesignDocument): string {
  if (path[0] === 'notes') return path.slice(1).join(' ')
  if (path[0] === 'choose' && path[1] === 'values') return path[2] ?? ''
  const label = metaOf(path, document)?.label
  if (label) return label
  const words = path
    .slice(-1)
    .join(' ')
    .replace(/([A-Z])/g, (capital) => ` ${capital.toLowerCase()}`)
  const parent = path.length > 2 ? at(knownParents, path.slice(-2, -1)) : undefined
  const text = typeof parent === 'string' ? `${parent}, ${words}` : words
  return text.charAt(0).toUpperCase() + text.slice(1)
}

const knownParents: Record<string, string> = {
  quantity: 'Measurand',
  excitation: 'Excitation',
  reference: 'Reference',
  filter: 'Filter',
  drive: 'Drive',
  curve: 'Curve',
}

function textOf(path: string[], value: unknown, document: DesignDocument): string {
  const meta = metaOf(path, document)
  if (typeof value === 'number') {
    if (path[0] === 'choose' && path[1] === 'values')
      return toRkm(value, /^C/i.test(path[2] ?? '') ? 'F' : 'Ω')
    if (isMeasurand(path)) return formatQuantity(value, document.sensor.quantity.unit, { digits: 12 })
    return formatQuantity(value, meta?.unit ?? '', {
      digits: 12,
      ...(meta?.display ? { display: meta.display } : {}),
    })
  }
  if (typeof value === 'boolean') return value ? 'yes' : 'no'
  if (typeof value === 'string') return value
  if (Array.isArray(value)) return listText(value, meta?.unit ?? '')
  return JSON.stringify(value) ?? ''
}

/** Values of the measurand carry its unit, which only the design knows. */
const isMeasurand = (path: string[]): boolean =>
  (path[0] === 'sensor' && (path[1] === 'quantity' || path[1] === 'zeroAt' || path[1] === 'ratedAt')) ||
  (path[0] === 'calibration' && path[1] === 'points')

function listText(values: unknown[], unit: string): string {
  if (values.length === 0) return 'none'
  return values
    .map((item) => {
      if (typeof item === 'number') return formatQuantity(item, unit, { digits: 12 })
      if (Array.isArray(item)) return item.map(String).join(': ')
      return typeof item === 'string' ? item : JSON.stringify(item)
    })
    .join('; ')
}

interface Meta {
  label: string
  unit: string
  display?: 'percent' | 'plain'
}

/** Label and unit that the schema carries for a path; undefined for names, kinds and lists of pairs. */
function metaOf(path: readonly string[], document: DesignDocument): Meta | undefined {
  let schema: unknown = designSchema
  for (const key of path) {
    const inner = unwrap(schema, document)
    const shape: unknown = inner && 'shape' in inner ? inner.shape : undefined
    schema = at(shape, [key])
    if (schema === undefined) return undefined
  }
  return findMeta(schema)
}

/** A schema's own label, or that of what it wraps or lists. */
function findMeta(schema: unknown): Meta | undefined {
  let current = schema
  for (let depth = 0; depth < 6 && current; depth += 1) {
    const meta = fieldMeta.get(current as z.ZodType)
    if (meta) return meta
    const def = at(current, ['def'])
    current = at(def, ['innerType']) ?? at(def, ['element'])
  }
  return undefined
}

/** Removes defaults and options; of a choice, the member that fits the sensor's kind or has named keys. */
function unwrap(schema: unknown, document: DesignDocument): Unknown | undefined {
  let current = schema
  for (let depth = 0; depth < 6; depth += 1) {
    const def = at(current, ['def'])
    const options = at(def, ['options'])
    const inner = at(def, ['innerType'])
    if (Array.isArray(options))
      current =
        options.find((option: unknown) => {
          const kind = at(option, ['shape', 'kind', 'def', 'values'])
          return Array.isArray(kind)
            ? kind.includes(document.sensor.kind)
            : at(option, ['shape']) !== undefined
        }) ?? options[0]
    else if (inner !== undefined) current = inner
    else break
  }
  return typeof current === 'object' && current !== null ? (current as Unknown) : undefined
}
