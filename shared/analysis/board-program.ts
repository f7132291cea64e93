import type { Elimination } from '#shared/numerics/elimination.ts'
import type { BoardTerms } from './board-terms.ts'

/*
 * A fixed elimination written out as operations on vectors, one entry per board. What is the same on every board is worked
 * out once, when the program is made: only entries that some parameter reaches become vectors at all.
 *
 * It may be, because in an elimination every change of an entry comes before its first use: constant contributions to an
 * entry that varies can therefore be put into its first value.
 */

/** Boards in a vector. */
export const BLOCK = 256

/**
 * t, a, b: vectors; k: a number. `draw` reads the parameter a instead of a vector. Where `from` is given the vector t
 * begins there: what it held before is of another block.
 */
export type Operation =
  | { code: 'add' | 'draw'; t: number; a: number; k: number; from?: number }
  | { code: 'subtract'; t: number; a: number; b: number; from?: number }
  | { code: 'scale'; t: number; a: number; k: number }
  | { code: 'multiply'; t: number; a: number }
  | { code: 'reciprocal'; t: number }
  | { code: 'floor'; t: number; k: number }

/** An entry of the matrix, of a right-hand side or of a solution: a number, or a vector that begins with it. */
interface Entry {
  value: number
  vector: number
}

const CONSTANT = -1

/** Vectors of the solutions: member · size + unknown; CONSTANT for what was not asked for. */
export interface BoardProgram {
  vectors: number
  /** Vectors that are the same for every board, with their number. */
  constants: readonly { vector: number; value: number }[]
  operations: readonly Operation[]
  solutions: Int32Array
}

/** Writes the elimination out for right-hand sides that share the matrix of the first; `wanted` marks unknowns. */
export function writeProgram(
  elimination: Elimination,
  members: readonly BoardTerms[],
  wanted: Uint8Array,
): BoardProgram {
  const writer = new Writer(elimination, members)
  writer.eliminate()
  return writer.substitute(wanted)
}

class Writer {
  private readonly entries: Entry[]
  /** Right-hand sides: member, row. */
  private readonly rights: Entry[][]
  private readonly filling: Operation[] = []
  private readonly operations: Operation[] = []
  /** Entries that stand for no place of the matrix. */
  private readonly made: Entry[] = []
  private vectors = 0

  constructor(
    private readonly elimination: Elimination,
    private readonly members: readonly BoardTerms[],
  ) {
    const { size, slots } = elimination
    const [first] = members
    if (!first) throw new RangeError('A program needs a right-hand side')
    this.entries = Array.from({ length: slots }, () => ({ value: 0, vector: CONSTANT }))
    first.base.constant.forEach((value, at) => {
      const entry = this.entryAt(at)
      if (entry) entry.value = value
    })
    this.rights = members.map(({ base }) =>
      Array.from({ length: size }, (_, row) => ({ value: base.dc[row]!, vector: CONSTANT })),
    )
    this.fill(first)
  }

  /** What the parameters do before anything is eliminated. */
  private fill({ conductances, linear }: BoardTerms): void {
    const { filling } = this
    for (const { value, floor, changes, entries } of conductances) {
      const own = this.vectorOf(this.make(value))
      for (const { parameter, scale } of changes)
        filling.push({ code: 'draw', t: own, a: parameter, k: scale })
      filling.push({ code: 'floor', t: own, k: floor })
      for (const { at, sign } of entries)
        filling.push({ code: 'add', t: this.vectorOf(this.entryAt(at)), a: own, k: sign })
    }
    for (const { at, parameter, scale } of linear)
      filling.push({ code: 'draw', t: this.vectorOf(this.entryAt(at)), a: parameter, k: scale })
    this.members.forEach(({ sources }, m) => {
      for (const { row, parameter, scale } of sources)
        filling.push({ code: 'draw', t: this.vectorOf(this.rights[m]?.[row]), a: parameter, k: scale })
    })
  }

  eliminate(): void {
    for (const { row, pivot, rows } of this.elimination.steps) {
      const inverse = this.invert(this.entries[pivot]!)
      for (const other of rows) {
        const ratio = this.product(this.entries[other.factor]!, inverse)
        for (let n = 0; n < other.pairs.length; n += 2)
          this.subtract(this.entries[other.pairs[n + 1]!]!, ratio, this.entries[other.pairs[n]!]!)
        for (const right of this.rights) this.subtract(right[other.row]!, ratio, right[row]!)
      }
    }
  }

  substitute(wanted: Uint8Array): BoardProgram {
    const { elimination, operations, filling, rights } = this
    const { size, steps } = elimination
    const solutions = new Int32Array(rights.length * size).fill(CONSTANT)
    rights.forEach((right, m) => {
      const known = new Map<number, Entry>()
      for (const { row, column, pivot, rest } of [...steps].reverse()) {
        if (wanted[column] !== 1) continue
        const x = this.make(0)
        this.subtract(x, this.make(-1), right[row]!)
        for (const { column: other, slot } of rest) this.subtract(x, this.entries[slot]!, known.get(other)!)
        const solved = this.product(x, this.entries[pivot]!)
        known.set(column, solved)
        // A constant is written out beside its number, so that whatever rests on it stays constant too.
        solutions[m * size + column] =
          solved.vector === CONSTANT ? this.vectorOf(this.make(solved.value)) : solved.vector
      }
    })
    const all = [...this.entries, ...rights.flat(), ...this.made].filter((e) => e.vector !== CONSTANT)
    const begin = new Map(all.map(({ vector, value }) => [vector, value]))
    const begun = [...filling, ...operations].map((operation): Operation => {
      const { code, t } = operation
      const from = begin.get(t)
      if (from === undefined || (code !== 'add' && code !== 'draw' && code !== 'subtract')) return operation
      begin.delete(t)
      return { ...operation, from }
    })
    const constants = [...begin].map(([vector, value]) => ({ vector, value }))
    return { vectors: this.vectors, constants, operations: begun, solutions }
  }

  /** The pivot's entry holds its reciprocal from here on. */
  private invert(pivot: Entry): Entry {
    if (pivot.vector === CONSTANT) pivot.value = 1 / pivot.value
    else this.operations.push({ code: 'reciprocal', t: pivot.vector })
    return pivot
  }

  /** `entry` times `factor`, in the place of `entry` where that varies. */
  private product(entry: Entry, factor: Entry): Entry {
    const [own, other] = [entry.vector, factor.vector]
    if (own !== CONSTANT && other !== CONSTANT) this.operations.push({ code: 'multiply', t: own, a: other })
    else if (own !== CONSTANT) {
      if (factor.value !== 1) this.operations.push({ code: 'scale', t: own, a: own, k: factor.value })
    } else if (other !== CONSTANT && entry.value !== 0) {
      const t = this.vectors++
      this.operations.push({ code: 'scale', t, a: other, k: entry.value })
      return { value: 0, vector: t }
    } else return this.make(entry.value === 0 ? 0 : entry.value * factor.value)
    return entry
  }

  private make(value: number): Entry {
    const entry = { value, vector: CONSTANT }
    this.made.push(entry)
    return entry
  }

  /** target −= ratio · source. */
  private subtract(target: Entry, ratio: Entry, source: Entry): void {
    const [r, s] = [ratio.vector, source.vector]
    if (r === CONSTANT && s === CONSTANT) target.value -= ratio.value * source.value
    else if (r !== CONSTANT && s !== CONSTANT)
      this.operations.push({ code: 'subtract', t: this.vectorOf(target), a: r, b: s })
    else {
      const k = r === CONSTANT ? ratio.value : source.value
      if (k === 0) return
      this.operations.push({ code: 'add', t: this.vectorOf(target), a: r === CONSTANT ? s : r, k: -k })
    }
  }

  private entryAt(at: number): Entry | undefined {
    const { size } = this.elimination
    return this.entries[this.elimination.slotOf(Math.floor(at / size), at % size)]
  }

  private vectorOf(entry: Entry | undefined): number {
    if (!entry) throw new RangeError('A parameter acts on an entry outside the pattern')
    if (entry.vector === CONSTANT) entry.vector = this.vectors++
    return entry.vector
  }
}
