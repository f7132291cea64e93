import type { Model } from '#shared/network/elements/element-kind.ts'
import { GROUND } from '#shared/network/types.ts'
import type { Network } from '#shared/network/types.ts'
import { planElimination, type Elimination } from '#shared/numerics/elimination.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'
import { BLOCK, writeProgram, type BoardProgram, type Operation } from './board-program.ts'
import { assembleBoard, collectTerms, type BoardEffect, type BoardTerms } from './board-terms.ts'
import { CircuitError } from '#shared/network/circuit-error.ts'
import { explainSingular, findBranch, findNode } from './system.ts'

export { BLOCK } from './board-program.ts'
export type { BoardEffect } from './board-terms.ts'

/*
 * Operating points of many boards of one network. The elimination is fixed once on the nominal board and then runs as
 * loops over a block of boards, entry by entry, so that the machine sees long plain loops: some millions of boards of a
 * dozen nodes per second. Nothing is generated as code: a strict content security policy allows it.
 */

/** Boards compared with a dense solution with pivoting before the fixed elimination is trusted, and how closely, V. */
const COMPARED = 64
const AGREEMENT = 1e-9

/** One network under one condition: what the parameters do to it. */
export interface BoardCase {
  network: Network
  effects: readonly BoardEffect[]
}

export interface BoardOptions {
  model: Model
  /** Common mode at which an amplifier's offset is given, V, as in `SensitivityOptions`. */
  references?: Readonly<Record<string, number>>
  /** Nodes and branch currents that are wanted; absent: all. */
  watch?: { nodes: readonly string[]; branches: readonly string[] }
  /** Solves every board by itself, with pivoting: the yardstick. */
  dense?: boolean
}

export interface BoardSolver {
  /**
   * Solves the first `count` boards (at most `BLOCK`) in every case. `amounts` holds parameter p of board i at
   * p·BLOCK + i.
   */
  solve(amounts: Float64Array, count: number): void
  /** Voltages of a node against ground, board by board, V; written anew by each `solve`. NaN: a board without an answer. */
  voltages(place: number, node: string): Float64Array
  /** Currents as in `DcSolution.current`, A. */
  currents(place: number, ref: string): Float64Array
  /** Eliminations per block: cases with one matrix share theirs. */
  readonly eliminations: number
  /** True where the fixed elimination was given up because it did not agree with dense solutions. */
  readonly fellBack: boolean
}

/**
 * Compiles the cases of a study, which share the parameters. Throws a CircuitError for a network without a single
 * operating point and a RangeError for an effect on what the network does not have.
 */
export function compileBoards(cases: readonly BoardCase[], options: BoardOptions): BoardSolver {
  const terms = cases.map(({ network, effects }) => collectTerms(network, effects, options))
  const groups: Group[] = []
  const memberOf = terms.map((own) => {
    let group = groups.find((g) => g.accepts(own))
    if (!group) groups.push((group = new Group(own, options)))
    return { group, member: group.add(own) }
  })
  for (const group of groups) group.compile()
  const at = (place: number) => {
    const found = memberOf[place]
    if (!found) throw new RangeError(`There is no case ${place}`)
    return found
  }
  const ground = new Float64Array(BLOCK)
  return {
    solve: (amounts, count) => groups.forEach((group) => group.solve(amounts, count)),
    voltages(place, node) {
      if (node === GROUND) return ground
      const { group, member } = at(place)
      return group.unknown(member, findNode(group.first.index, node))
    },
    currents(place, ref) {
      const { group, member } = at(place)
      return group.unknown(member, findBranch(group.first.index, ref))
    },
    eliminations: groups.length,
    get fellBack() {
      return groups.some((group) => group.fellBack)
    },
  }
}

/** Cases with one matrix on every board: they differ in their sources only. */
class Group {
  readonly first: BoardTerms
  fellBack = false
  private readonly members: BoardTerms[] = []
  private readonly elimination: Elimination
  private readonly wanted: Uint8Array
  private program: BoardProgram | null = null
  private vectors = new Float64Array(0)
  private trusted = false

  constructor(
    terms: BoardTerms,
    private readonly options: BoardOptions,
  ) {
    this.first = terms
    this.elimination = planFor(terms, options.model)
    this.wanted = this.unknownsWanted()
  }

  accepts(terms: BoardTerms): boolean {
    const own = this.first
    return (
      terms.index.size === own.index.size &&
      terms.index.nodes.every((node, i) => node === own.index.nodes[i]) &&
      terms.index.branches.every((ref, i) => ref === own.index.branches[i]) &&
      terms.base.constant.every((value, i) => value === own.base.constant[i]) &&
      JSON.stringify([terms.conductances, terms.linear]) === JSON.stringify([own.conductances, own.linear])
    )
  }

  add(terms: BoardTerms): number {
    return this.members.push(terms) - 1
  }

  /** After the last member has been added. */
  compile(): void {
    this.program = writeProgram(this.elimination, this.members, this.wanted)
    this.vectors = new Float64Array(this.program.vectors * BLOCK)
    for (const { vector, value } of this.program.constants)
      this.vectors.fill(value, vector * BLOCK, (vector + 1) * BLOCK)
  }

  unknown(member: number, at: number): Float64Array {
    const vector = this.solutionAt(member, at)
    if (vector < 0) throw new RangeError('That unknown was not asked for when the boards were compiled')
    return this.vectors.subarray(vector * BLOCK, (vector + 1) * BLOCK)
  }

  solve(amounts: Float64Array, count: number): void {
    if (this.options.dense || this.fellBack) return this.solveDense(amounts, count)
    runOperations(this.program?.operations ?? [], this.vectors, amounts, count)
    if (this.trusted) return
    this.trusted = true
    const found = this.vectors.slice()
    const compared = Math.min(count, COMPARED)
    this.solveDense(amounts, compared)
    this.fellBack = !this.agree(found, compared)
    if (this.fellBack) this.solveDense(amounts, count)
    else this.vectors.set(found)
  }

  private agree(found: Float64Array, count: number): boolean {
    const nodes = this.first.index.nodes.length
    return this.members.every((_, member) => {
      for (let unknown = 0; unknown < nodes; unknown++) {
        const start = this.solutionAt(member, unknown) * BLOCK
        if (start < 0) continue
        for (let i = start; i < start + count; i++)
          if (!(Math.abs(found[i]! - this.vectors[i]!) <= AGREEMENT)) return false
      }
      return true
    })
  }

  private solutionAt(member: number, unknown: number): number {
    return this.program?.solutions[member * this.elimination.size + unknown] ?? -1
  }

  /** Each board by itself, with pivoting. */
  private solveDense(amounts: Float64Array, count: number): void {
    const { size } = this.elimination
    const matrix = new Float64Array(size * size)
    const right = new Float64Array(size)
    this.members.forEach((terms, member) => {
      for (let board = 0; board < count; board++) {
        assembleBoard(terms, amounts, BLOCK, board, matrix, right)
        const lu = factorLu(matrix, size)
        const x = lu.sign === 0 ? null : solveLu(lu, right)
        for (let unknown = 0; unknown < size; unknown++) {
          const vector = this.solutionAt(member, unknown)
          if (vector >= 0) this.vectors[vector * BLOCK + board] = x ? x[unknown]! : NaN
        }
      }
    })
  }

  /** Unknowns that are watched, and those that they are solved from. */
  private unknownsWanted(): Uint8Array {
    const { index } = this.first
    const { watch } = this.options
    const wanted = new Uint8Array(index.size)
    if (!watch) return wanted.fill(1)
    for (const node of watch.nodes) if (node !== GROUND) wanted[findNode(index, node)] = 1
    for (const ref of watch.branches) wanted[findBranch(index, ref)] = 1
    for (const { column, rest } of this.elimination.steps)
      if (wanted[column] === 1) for (const { column: needed } of rest) wanted[needed] = 1
    return wanted
  }
}

/** Fixes the order of elimination on the nominal board. */
function planFor({ network, index, base, conductances, linear }: BoardTerms, model: Model): Elimination {
  const { size } = index
  const nominal = base.constant.slice()
  const pattern = Uint8Array.from(nominal, (value) => (value === 0 ? 0 : 1))
  for (const { value, entries } of conductances)
    for (const { at, sign } of entries) {
      nominal[at]! += sign / value
      pattern[at] = 1
    }
  for (const { at } of linear) pattern[at] = 1
  const planned = planElimination(nominal, pattern, size, findNode(index, network.output.p))
  if (planned) return planned
  const lu = factorLu(nominal, size)
  if (lu.sign === 0) throw explainSingular(network, model, lu)
  throw new CircuitError('not-determined', '', 'The circuit has no single operating point')
}

/** Runs a program over the first `count` boards of a block: each operation one plain loop. */
function runOperations(
  operations: readonly Operation[],
  v: Float64Array,
  amounts: Float64Array,
  count: number,
): void {
  for (const operation of operations) {
    const t = operation.t * BLOCK
    switch (operation.code) {
      case 'draw':
        addScaled(v, t, amounts, operation.a * BLOCK, operation.k, operation.from, count)
        break
      case 'add':
        addScaled(v, t, v, operation.a * BLOCK, operation.k, operation.from, count)
        break
      case 'scale':
        for (let i = 0, a = operation.a * BLOCK; i < count; i++) v[t + i] = operation.k * v[a + i]!
        break
      case 'multiply':
        for (let i = 0, a = operation.a * BLOCK; i < count; i++) v[t + i]! *= v[a + i]!
        break
      case 'subtract':
        subtractProduct(v, t, operation.a * BLOCK, operation.b * BLOCK, operation.from, count)
        break
      case 'reciprocal':
        for (let i = t; i < t + count; i++) v[i] = 1 / v[i]!
        break
      case 'floor':
        for (let i = t; i < t + count; i++) v[i] = 1 / Math.max(v[i]!, operation.k)
    }
  }
}

function addScaled(
  v: Float64Array,
  t: number,
  given: Float64Array,
  a: number,
  k: number,
  from: number | undefined,
  count: number,
): void {
  if (from === undefined) for (let i = 0; i < count; i++) v[t + i]! += k * given[a + i]!
  else for (let i = 0; i < count; i++) v[t + i] = from + k * given[a + i]!
}

function subtractProduct(
  v: Float64Array,
  t: number,
  a: number,
  b: number,
  from: number | undefined,
  count: number,
): void {
  if (from === undefined) for (let i = 0; i < count; i++) v[t + i]! -= v[a + i]! * v[b + i]!
  else for (let i = 0; i < count; i++) v[t + i] = from - v[a + i]! * v[b + i]!
}
