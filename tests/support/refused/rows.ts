import { buildDesign } from '../designs.ts'

/* Documents that are no designs, made by hand so that they may hold what the types forbid. */

export type Json = Record<string, unknown>

export const bridge = {
  kind: 'bridge',
  quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
  excitation: 5,
  sensitivity: 0.002,
}

/** A valid document with one place changed. */
export function withValue(path: string, value: unknown, from: unknown = buildDesign()): Json {
  const copy = structuredClone(from) as Json
  const keys = path.split('.')
  let at = copy
  for (const key of keys.slice(0, -1)) {
    if (typeof at[key] !== 'object' || at[key] === null) at[key] = {}
    at = at[key] as Json
  }
  at[keys.at(-1) ?? ''] = value
  return copy
}

export function without(path: string, from: unknown = buildDesign()): Json {
  const copy = structuredClone(from) as Json
  const keys = path.split('.')
  const holder = keys.slice(0, -1).reduce((at, key) => at[key] as Json, copy)
  delete holder[keys.at(-1) ?? '']
  return copy
}

/** [what is wrong, document, path, words of the reason, words of what is accepted] */
export type Row = [string, unknown, string, RegExp, RegExp]
