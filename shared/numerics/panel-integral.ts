/**
 * Integral of a vector of functions by Gauss–Kronrod panels of 3 and 7 points. Both rules are computed for every panel;
 * their difference says where to halve. Source of the rule: Kronrod, Nodes and Weights of Quadrature Formulas (1965).
 */

const NODES = [0, 0.4342437493468026, 0.7745966692414834, 0.9604912687080202]
const WEIGHTS = [0.4509165386584741, 0.4013974147759622, 0.2684880898683334, 0.1046562260264673]
const INNER_WEIGHTS = [0.8888888888888888, 0, 0.5555555555555556, 0]

export interface Panel {
  from: number
  to: number
  /** One per function. */
  values: Float64Array
  sum: number
  /** |7 points − 3 points| of the sum; the error of `sum` is of the order of its square. */
  difference: number
}

export type VectorFunction = (x: number) => Float64Array

/** One panel of a vector function whose components are of one sign. */
export function integratePanel(f: VectorFunction, from: number, to: number): Panel {
  const middle = (from + to) / 2
  const half = (to - from) / 2
  let values: Float64Array | null = null
  let coarse = 0
  NODES.forEach((node, i) => {
    for (const x of node === 0 ? [middle] : [middle - half * node, middle + half * node]) {
      const found = f(x)
      values ??= new Float64Array(found.length)
      for (let k = 0; k < found.length; k++) {
        values[k]! += WEIGHTS[i]! * half * found[k]!
        coarse += INNER_WEIGHTS[i]! * half * found[k]!
      }
    }
  })
  const found = values ?? new Float64Array(0)
  const sum = found.reduce((total, value) => total + value, 0)
  return { from, to, values: found, sum, difference: Math.abs(sum - coarse) }
}

/** Halvings that resolve a resonance of any sharpness a network of real parts has. */
const DEEPEST = 14

/**
 * Halves the panels that need it until each one's two rules differ by less than `relative` of itself or by 1e-5 of the
 * whole, and adds up. Shapes: one sum per function.
 */
export function refinePanels(f: VectorFunction, panels: readonly Panel[], relative = 3e-3): Float64Array {
  const whole = panels.reduce((total, panel) => total + Math.abs(panel.sum), 0)
  const totals = new Float64Array(panels[0]?.values.length ?? 0)
  const settle = (panel: Panel, depth: number): void => {
    const enough = Math.max(relative * Math.abs(panel.sum), 1e-5 * whole)
    if (panel.difference <= enough || depth === 0) {
      panel.values.forEach((value, k) => {
        totals[k]! += value
      })
      return
    }
    const middle = (panel.from + panel.to) / 2
    settle(integratePanel(f, panel.from, middle), depth - 1)
    settle(integratePanel(f, middle, panel.to), depth - 1)
  }
  for (const panel of panels) settle(panel, DEEPEST)
  return totals
}
