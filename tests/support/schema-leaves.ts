import { fieldMeta } from '#shared/units/fields.ts'
import { designSchema } from '#shared/design/schema.ts'

/** A place of the design schema that holds a plain value, found by walking the schema. */
export interface Leaf {
  /** Keys from the top; a number stands for a place in a list. */
  path: (string | number)[]
  /** Sensor kind that has it; null for every kind. */
  kind: string | null
  rule: LeafRule
}

export type LeafRule =
  | { type: 'number'; least: number; most: number; above: boolean; below: boolean; integer: boolean }
  | { type: 'choice'; values: readonly (string | number | boolean)[] }
  | { type: 'text'; least: number; most: number }
  | { type: 'free' }

/** The parts of a schema node that the walk reads. */
interface Node {
  def: {
    type: string
    innerType?: Node
    shape?: Record<string, Node>
    options?: readonly Node[]
    element?: Node
    items?: readonly Node[]
    valueType?: Node
    entries?: Record<string, string>
    values?: readonly (string | number | boolean)[]
    checks?: readonly Check[]
  }
  minLength?: number | null
  maxLength?: number | null
  isInt?: boolean
}

/** A bound of a number: at least or at most `value`. */
interface Check {
  _zod: { def: { check: string; value?: number; inclusive?: boolean } }
}

const wrappers = new Set(['optional', 'default', 'prefault', 'nullable'])

/** Every leaf of the design schema. Lists show their first place, records one key. */
export function schemaLeaves(): Leaf[] {
  return walk(designSchema as unknown as Node, [], null)
}

function walk(node: Node, path: Leaf['path'], kind: string | null): Leaf[] {
  const { def } = node
  if (wrappers.has(def.type) && def.innerType) return walk(def.innerType, path, kind)
  const leaf = (rule: LeafRule): Leaf[] => [{ path, kind, rule }]
  switch (def.type) {
    case 'object':
      return Object.entries(def.shape ?? {}).flatMap(([key, child]) => walk(child, [...path, key], kind))
    case 'union':
      return (def.options ?? []).flatMap((option) => walk(option, path, kindOf(option) ?? kind))
    case 'array':
      return def.element ? walk(def.element, [...path, 0], kind) : []
    case 'tuple':
      return (def.items ?? []).flatMap((item, at) => walk(item, [...path, at], kind))
    case 'record':
      return def.valueType ? walk(def.valueType, [...path, recordKey(path)], kind) : []
    case 'number':
      return leaf(numberRule(node))
    case 'boolean':
      return leaf({ type: 'choice', values: [true, false] })
    case 'enum':
      return leaf({ type: 'choice', values: Object.values(def.entries ?? {}) })
    case 'literal':
      return leaf({ type: 'choice', values: def.values ?? [] })
    case 'string':
      return leaf({ type: 'text', least: node.minLength ?? 0, most: node.maxLength ?? 40 })
    default:
      return leaf({ type: 'free' })
  }
}

const recordKey = (path: Leaf['path']): string => (path.at(-1) === 'values' ? 'R1' : 'word')

function kindOf(option: Node): string | null {
  const literal = option.def.shape?.kind?.def.values?.[0]
  return typeof literal === 'string' ? literal : null
}

function numberRule(node: Node): LeafRule {
  const rule = { type: 'number' as const, least: -Infinity, most: Infinity, above: false, below: false }
  for (const check of node.def.checks ?? []) {
    const { check: what, value = NaN, inclusive = true } = check._zod.def
    if (what === 'greater_than' && value >= rule.least) {
      rule.above = value === rule.least ? rule.above || !inclusive : !inclusive
      rule.least = value
    }
    if (what === 'less_than' && value <= rule.most) {
      rule.below = value === rule.most ? rule.below || !inclusive : !inclusive
      rule.most = value
    }
  }
  return { ...rule, integer: node.isInt ?? false }
}

/** Number fields that carry no label, unit and accepted range for form and messages. */
export function unlabelled(): string[] {
  const found: string[] = []
  const visit = (node: Node, path: string): void => {
    const { def } = node
    if (def.type === 'number' && !fieldMeta.get(node as never)) found.push(path)
    const children: [string, Node | undefined][] = [
      ['', def.innerType],
      ...Object.entries(def.shape ?? {}).map(([key, child]): [string, Node] => [`.${key}`, child]),
      ...(def.options ?? []).map((option): [string, Node] => ['', option]),
      ['[]', def.element],
      ...(def.items ?? []).map((item, at): [string, Node] => [`[${at}]`, item]),
      ['.*', def.valueType],
    ]
    for (const [step, child] of children) if (child) visit(child, path + step)
  }
  visit(designSchema as unknown as Node, '')
  return found.map((path) => path.replace(/^\./, ''))
}
