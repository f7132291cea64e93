import type { z } from 'zod'
import { sensorKinds } from '#shared/sensors/index.ts'
import { fieldMeta } from '#shared/units/fields.ts'
import { crossFaults } from './cross-faults.ts'
import { noteFaults } from './note-faults.ts'
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
  const faults = [...crossFaults(parsed.data), ...noteFaults(parsed.data.notes)]
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
    case 'invalid_key':
      return [
        {
          path,
          reason: `${show(issue.path.at(-1))} is no reference designator`,
          accepted: 'up to six letters and digits, letter first, as in R1',
        },
      ]
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
          accepted: meta ? withLimit(meta.accepted, issue) : acceptedOf(issue),
        },
      ]
  }
}

function unionFault(issue: Issue & { code: 'invalid_union' }, path: string): Fault {
  if ('discriminator' in issue && typeof issue.discriminator === 'string') {
    const kinds = sensorKinds.map(({ kind }) => `"${kind}"`).join(', ')
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

/** A field that names no upper limit still has the one of absurd magnitudes; whoever passes it is told. */
const withLimit = (accepted: string, issue: Issue): string =>
  issue.code === 'too_big' && !/up to|below/.test(accepted)
    ? `${accepted}, at most ${issue.maximum}`
    : accepted

function acceptedOf(issue: Issue): string {
  if (issue.code === 'too_small')
    return `at least ${String(issue.minimum)} ${issue.origin === 'string' ? 'characters' : ''}`.trim()
  if (issue.code === 'too_big')
    return `at most ${String(issue.maximum)} ${issue.origin === 'string' ? 'characters' : ''}`.trim()
  if (issue.code === 'invalid_type') return issue.expected === 'object' ? 'an object' : `a ${issue.expected}`
  return issue.message
}

const show = (value: unknown): string => {
  if (Array.isArray(value)) return 'a list'
  if (typeof value === 'object' && value !== null) return 'an object'
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
  // A choice of texts has options too, which are no schemas.
  if (typeof node?.options?.[0] === 'object')
    node = unwrap(node.options.find((option) => matches(unwrap(option), at)))
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
