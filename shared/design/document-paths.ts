/**
 * Reading and changing a document by dotted path (`sensor.output.low`, `choose.stages.0.gain`). Documents are never
 * changed in place: every undo step keeps the one before.
 */

/** A design as it stands while it is being written: it may still lack what is required. */
export type DraftDocument = { readonly [key: string]: unknown }

type Container = Readonly<Record<string, unknown>> | readonly unknown[]

const isContainer = (value: unknown): value is Container => typeof value === 'object' && value !== null

/** A source may be written as a plain number, its voltage; the form edits the object that this stands for. */
const opened = (value: unknown): unknown => (typeof value === 'number' ? { voltage: value } : value)

const child = (given: unknown, key: string): unknown => {
  const parent = opened(given)
  return isContainer(parent) && Object.hasOwn(parent, key)
    ? (parent as Record<string, unknown>)[key]
    : undefined
}

/** The value at a path; undefined where there is none. */
export function getAt(document: DraftDocument, path: string): unknown {
  return path.split('.').reduce<unknown>(child, document)
}

export function numberAt(document: DraftDocument, path: string): number | null {
  const value = getAt(document, path)
  return typeof value === 'number' ? value : null
}

export function textAt(document: DraftDocument, path: string): string {
  const value = getAt(document, path)
  return typeof value === 'string' ? value : ''
}

/** A copy with the value put at the path; undefined removes the key, and with it groups that became empty. */
export function setAt(document: DraftDocument, path: string, value: unknown): DraftDocument {
  const keys = path.split('.')
  const changed = value === undefined ? remove(document, keys) : put(document, keys, value)
  return (changed ?? {}) as DraftDocument
}

function put(given: unknown, keys: readonly string[], value: unknown): unknown {
  const [key, ...rest] = keys
  if (key === undefined) return value
  const parent = opened(given)
  const next = put(child(parent, key), rest, value)
  if (Array.isArray(parent) || (parent === undefined && /^\d+$/.test(key))) {
    const list: unknown[] = Array.isArray(parent) ? [...(parent as unknown[])] : []
    list[Number(key)] = next
    return list
  }
  return { ...(isContainer(parent) ? parent : {}), [key]: next }
}

/** Sections that a design cannot be without: they stay, even when empty. */
const SECTIONS = new Set(['sensor', 'converter', 'rails'])

function remove(given: unknown, keys: readonly string[], depth = 0): unknown {
  const [key, ...rest] = keys
  if (key === undefined) return undefined
  const parent = opened(given)
  if (!isContainer(parent) || !Object.hasOwn(parent, key)) return parent
  const next = rest.length > 0 ? remove(child(parent, key), rest, depth + 1) : undefined
  if (Array.isArray(parent)) {
    const list = [...(parent as unknown[])]
    if (next === undefined) list.splice(Number(key), 1)
    else list[Number(key)] = next
    return list.length === 0 ? undefined : list
  }
  const copy = { ...(parent as Record<string, unknown>) }
  if (next === undefined && !(depth === 0 && SECTIONS.has(key))) delete copy[key]
  else copy[key] = next ?? {}
  return Object.keys(copy).length === 0 && depth > 0 ? undefined : copy
}
