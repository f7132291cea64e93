import type { Stamper } from './element-kind.ts'

/** Stamps g + s·c (S, F) between nodes a and b. */
export function stampAdmittance(stamper: Stamper, a: string, b: string, g: number, c = 0): void {
  const row = stamper.node(a)
  const column = stamper.node(b)
  stamper.add(row, row, g, c)
  stamper.add(column, column, g, c)
  stamper.add(row, column, -g, -c)
  stamper.add(column, row, -g, -c)
}

/** Stamps what every element with a voltage between p and n shares: its current leaves p and enters n. */
export function stampBranch(stamper: Stamper, branch: number, p: number, n: number): void {
  stamper.add(p, branch, 1)
  stamper.add(n, branch, -1)
  stamper.add(branch, p, 1)
  stamper.add(branch, n, -1)
}
