/*
 * Sparse elimination with the order of pivots fixed once, for many matrices of one pattern whose entries differ little.
 *
 * Pivots are chosen on one nominal matrix, its rows scaled by their largest entries: among those not below a hundredth of
 * their column's largest entry the one with the least Markowitz count (r − 1)(c − 1), so that few entries are filled in.
 * Source: Duff, Erisman and Reid, Direct Methods for Sparse Matrices, 2nd ed., sections 5.3 and 7.2.
 */

/** A pivot may be this much smaller than the largest scaled entry of its column. */
const THRESHOLD = 0.01

/** Entries are known by slots: numbers from 0 that `slotOf` gives for a row and a column. */
export interface EliminationStep {
  row: number
  column: number
  pivot: number
  /** Rows from which this one is subtracted: slot of the factor, and pairs (slot here, slot there) for the rest. */
  rows: { row: number; factor: number; pairs: Int32Array }[]
  /** Entries of the pivot's row that are left when its unknown is solved for. */
  rest: { column: number; slot: number }[]
}

export interface Elimination {
  size: number
  /** Slots used, filled-in entries included. */
  slots: number
  /** Slot of an entry of the pattern; -1 for an entry that is always zero. */
  slotOf(row: number, column: number): number
  steps: EliminationStep[]
}

/**
 * Fixes the elimination of a matrix (size × size, row-major) whose entries may be other than zero where `pattern` is 1.
 * `last` is the unknown to be solved for first, which then needs no other. Null for a singular matrix.
 */
export function planElimination(
  nominal: Float64Array,
  pattern: Uint8Array,
  size: number,
  last: number,
): Elimination | null {
  const values = scaleRows(nominal, size)
  if (!values) return null
  const slots = new Int32Array(size * size).fill(-1)
  let used = 0
  const take = (at: number) => {
    if (slots[at] === -1) slots[at] = used++
    return slots[at]!
  }
  for (let at = 0; at < size * size; at++) if (pattern[at] === 1) take(at)
  const rows = new Set(range(size))
  const columns = new Set(range(size))
  const steps: EliminationStep[] = []
  while (rows.size > 0) {
    const found = choosePivot(values, slots, size, rows, columns, last)
    if (!found) return null
    const { row, column } = found
    rows.delete(row)
    columns.delete(column)
    const kept = [...columns].filter((c) => slots[row * size + c] !== -1)
    const step: EliminationStep = {
      row,
      column,
      pivot: slots[row * size + column]!,
      rows: [],
      rest: kept.map((c) => ({ column: c, slot: slots[row * size + c]! })),
    }
    for (const other of rows) {
      const factor = slots[other * size + column]!
      if (factor === -1) continue
      const ratio = values[other * size + column]! / values[row * size + column]!
      const pairs = kept.flatMap((c) => {
        values[other * size + c]! -= ratio * values[row * size + c]!
        return [slots[row * size + c]!, take(other * size + c)]
      })
      step.rows.push({ row: other, factor, pairs: Int32Array.from(pairs) })
    }
    steps.push(step)
  }
  return { size, slots: used, slotOf: (row, column) => slots[row * size + column]!, steps }
}

const range = (size: number): number[] => Array.from({ length: size }, (_, i) => i)

/** The matrix with each row over its largest entry; null where a row has none. */
function scaleRows(nominal: Float64Array, size: number): Float64Array | null {
  const values = nominal.slice()
  for (let row = 0; row < size; row++) {
    const entries = values.subarray(row * size, (row + 1) * size)
    const largest = entries.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
    if (!(largest > 0)) return null
    for (let column = 0; column < size; column++) entries[column]! /= largest
  }
  return values
}

function choosePivot(
  values: Float64Array,
  slots: Int32Array,
  size: number,
  rows: ReadonlySet<number>,
  columns: ReadonlySet<number>,
  last: number,
): { row: number; column: number } | null {
  const present = (row: number, column: number) => slots[row * size + column] !== -1
  const perRow = new Map([...rows].map((r) => [r, [...columns].filter((c) => present(r, c)).length]))
  let best: { row: number; column: number } | null = null
  let bestCount = Infinity
  let bestSize = 0
  for (const column of columns) {
    if (column === last && columns.size > 1) continue
    const candidates = [...rows].filter((r) => present(r, column))
    const entry = (row: number) => Math.abs(values[row * size + column]!)
    const largest = Math.max(0, ...candidates.map(entry))
    for (const row of candidates) {
      const here = entry(row)
      if (!(here > 0 && here >= THRESHOLD * largest)) continue
      const count = ((perRow.get(row) ?? 0) - 1) * (candidates.length - 1)
      if (count > bestCount || (count === bestCount && here <= bestSize)) continue
      best = { row, column }
      bestCount = count
      bestSize = here
    }
  }
  return best
}
