import { kindOf, stampPort } from '#shared/network/elements/index.ts'
import type { Model, PortName, Stamper } from '#shared/network/elements/element-kind.ts'
import type { Network } from '#shared/network/types.ts'
import { solveDc } from './dc.ts'
import { assembleSystem, findBranch, findElement, findNode, indexUnknowns } from './system.ts'
import type { System, UnknownIndex } from './system.ts'

/** What one parameter does: `scale` of the port's amount per unit of it. Several may act on one port; they add. */
export interface BoardEffect {
  parameter: number
  ref: string
  port: PortName
  scale: number
}

/** A change of parameter p by one changes an amount by `scale`. */
interface Change {
  parameter: number
  scale: number
}

/** A network's equations apart: what is the same on every board, and how each parameter changes the rest. */
export interface BoardTerms {
  network: Network
  index: UnknownIndex
  /** Without the conductances below. */
  base: System
  /** Elements that enter by the reciprocal of their value, Ω: never below `floor`. Entries row·size + column, sign ±1. */
  conductances: {
    value: number
    floor: number
    changes: Change[]
    entries: { at: number; sign: number }[]
  }[]
  /** Entries of the matrix that change in proportion. */
  linear: (Change & { at: number })[]
  /** Entries of the right-hand side that change in proportion. */
  sources: (Change & { row: number })[]
}

/** A resistor keeps at least this share of its nominal value, whatever adds up against it. */
const LEAST_SHARE = 0.01

/** Takes the equations of a network apart. */
export function collectTerms(
  network: Network,
  effects: readonly BoardEffect[],
  { model, references }: { model: Model; references?: Readonly<Record<string, number>> },
): BoardTerms {
  const index = indexUnknowns(network)
  const reciprocal = new Map<string, Change[]>()
  const proportional: BoardEffect[] = []
  for (const effect of effects) {
    const element = findElement(index, effect.ref)
    if (effect.scale === 0) continue
    if (effect.port !== 'value' || !kindOf(element).conductance(element)) proportional.push(effect)
    else {
      const known = reciprocal.get(effect.ref) ?? []
      known.push({ parameter: effect.parameter, scale: effect.scale })
      reciprocal.set(effect.ref, known)
    }
  }
  const terms: BoardTerms = {
    network,
    index,
    base: assembleSystem(network, { model, without: new Set(reciprocal.keys()) }),
    conductances: [],
    linear: [],
    sources: [],
  }
  for (const [ref, changes] of reciprocal) terms.conductances.push(toConductance(index, ref, changes))
  const nominal = once(() => solveDc(network, { model }))
  const voltage = (node: string) => ((index.nodeAt.get(node) ?? -1) < 0 ? 0 : nominal().voltage(node))
  for (const { ref, port, parameter, scale } of proportional) {
    const stamper: Stamper = {
      model,
      node: (name) => findNode(index, name),
      branch: (name) => findBranch(index, name),
      add(row, column, value) {
        if (row < 0 || column < 0 || value === 0) return
        terms.linear.push({ parameter, scale: scale * value, at: row * index.size + column })
      },
      addSource(row, value) {
        if (row >= 0 && value !== 0) terms.sources.push({ parameter, scale: scale * value, row })
      },
    }
    stampPort(findElement(index, ref), port, stamper, { reference: references?.[ref], voltage })
  }
  return terms
}

/** Writes the equations of one board: `matrix` row by row, and the right-hand side. Parameter p at p·stride + board. */
export function assembleBoard(
  { base, conductances, linear, sources }: BoardTerms,
  amounts: Float64Array,
  stride: number,
  board: number,
  matrix: Float64Array,
  right: Float64Array,
): void {
  matrix.set(base.constant)
  right.set(base.dc)
  for (const { value, floor, changes, entries } of conductances) {
    const changed = changes.reduce((sum, c) => sum + c.scale * amounts[c.parameter * stride + board]!, value)
    for (const { at, sign } of entries) matrix[at]! += sign / Math.max(changed, floor)
  }
  for (const { at, parameter, scale } of linear) matrix[at]! += scale * amounts[parameter * stride + board]!
  for (const { row, parameter, scale } of sources) right[row]! += scale * amounts[parameter * stride + board]!
}

function toConductance(
  index: UnknownIndex,
  ref: string,
  changes: Change[],
): BoardTerms['conductances'][number] {
  const element = findElement(index, ref)
  const branch = kindOf(element).conductance(element)
  const value = kindOf(element).value(element)
  if (!branch || value === null) throw new RangeError(`${ref} has no conductance`)
  const [a, b] = [findNode(index, branch.a), findNode(index, branch.b)]
  const entry = (row: number, column: number, sign: number) =>
    row < 0 || column < 0 ? [] : [{ at: row * index.size + column, sign }]
  return {
    value,
    floor: LEAST_SHARE * value,
    changes,
    entries: [...entry(a, a, 1), ...entry(b, b, 1), ...entry(a, b, -1), ...entry(b, a, -1)],
  }
}

function once<T>(make: () => T): () => T {
  let made: { value: T } | null = null
  return () => (made ??= { value: make() }).value
}
