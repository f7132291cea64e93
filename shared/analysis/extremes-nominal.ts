import { solveTransposedLu, factorLu } from '#shared/numerics/lu.ts'
import { narrowClipRange } from './clip-range.ts'
import type { Problem } from './extremes-problem.ts'
import { addPorts, clipSpan } from './extremes-problem.ts'
import { explainSingular } from './system.ts'
import { addConductance } from './vertex-walk.ts'

export interface NominalOutputs {
  values: Float64Array
  clipLow: Float64Array
  clipHigh: Float64Array
  clipEmpty: Uint8Array
}

/** Outputs and clip ends of the nominal board: resistors and free variables at nominal, no common-mode error. */
export function nominalOutputs(problem: Problem): NominalOutputs {
  const { size, cases, outputs, clip } = problem
  const matrix = problem.matrix.slice()
  for (const resistor of problem.resistors) addConductance(matrix, size, resistor, resistor.nominal)
  const lu = factorLu(matrix, size)
  if (lu.sign === 0) throw explainSingular(problem.network, problem.request.model, lu)
  const count = outputs.length * cases
  const found: NominalOutputs = {
    values: new Float64Array(count),
    clipLow: new Float64Array(count).fill(-Infinity),
    clipHigh: new Float64Array(count).fill(Infinity),
    clipEmpty: new Uint8Array(count),
  }
  const none = new Float64Array(0)
  outputs.forEach((output, o) => {
    const chosen = new Float64Array(size)
    output.at.forEach((k, i) => (chosen[k]! += output.weight[i]!))
    const adjoint = solveTransposedLu(lu, chosen)
    const respond = (right: Float64Array) => right.reduce((sum, value, i) => sum + value * adjoint[i]!, 0)
    const base = problem.nominalConstant[o]! + respond(problem.nominalSource)
    const gains = problem.variables.map((variable) => {
      const right = new Float64Array(size)
      addPorts(right, problem.ports, variable.ports, 1)
      return variable.inOutput[o]! + respond(right)
    })
    for (let c = 0; c < cases; c++) {
      let value = base
      problem.variables.forEach((variable, v) => {
        const pinned = variable.pinned[c]!
        if (!Number.isNaN(pinned)) value += gains[v]! * (pinned - variable.nominal)
      })
      const entry = o * cases + c
      found.values[entry] = value
      if (!clip || problem.clipCase[c] !== c) continue
      const slope = gains[problem.variables.indexOf(clip)]!
      const free = Number.isNaN(clip.pinned[c]!)
      const atOrigin = free ? value + slope * (clip.middle - clip.nominal) : value
      narrowClipRange(
        { count: 0, value: atOrigin, slope, weights: none, offsets: none, slopes: none },
        clipSpan(problem),
        found,
        entry,
      )
    }
  })
  return found
}
