import { deviationOf, type Spread } from '#shared/numerics/coverage.ts'
import type { BudgetLine, ErrorState } from '#shared/design/plan.ts'
import { CUT, factorOf, type Condition, type ErrorInput } from './error-input.ts'
import type { ErrorField, FieldPoint } from './error-field.ts'

export const states: readonly ErrorState[] = ['asBuilt', 'zeroed', 'calibrated']

/** dy per unit of x that is left, V, at every place: point of the span × condition. */
export type Residuals = Float64Array

/** One line of the budget with what it leaves everywhere. */
export interface Term {
  id: string
  label: string
  source: string
  path: string | null
  limit: number
  unit: string
  distribution: BudgetLine['distribution']
  group: string | null
  /** Standard deviation of x. */
  deviation: number
  /** Its distribution for a half-width, or limit, of `limit` times this residual. */
  spread(residual: number): Spread
  /** Largest factor of the conditions, by which the limit is multiplied out. */
  mostFactor: number
  calibrates: BudgetLine['calibrates']
  residuals: Record<ErrorState, Residuals>
  /** dy per unit of the multiplied amount at every place. */
  slopes: Float64Array
  /** The places, alike for all terms of a budget. */
  places: readonly Place[]
}

export interface Place {
  point: number
  quantity: number
  condition: Condition
  temperature: number
}

export function placesOf(field: ErrorField): Place[] {
  return field.points.flatMap((point, at) =>
    field.conditions.map((condition) => ({
      point: at,
      quantity: point.quantity,
      condition,
      temperature: condition.temperature,
    })),
  )
}

/** Weights of the straight line through the two adjustment points. */
export function lineWeights(field: ErrorField, quantity: number): [number, number] {
  const [q0, q1] = field.adjusted.map((p) => p.quantity) as [number, number]
  const second = (quantity - q0) / (q1 - q0)
  return [1 - second, second]
}

/**
 * What each input leaves, f being its factor under a condition and s its slope:
 *   as built    s(q)·f(T, t)
 *   zeroed      s(q)·f(T, t) − s(q0)·f(Tcal, 0)
 *   calibrated  s(q)·f(T, t) − [L0(q)·s(q0) + L1(q)·s(q1)]·f(Tcal, 0)
 * What is another at every reading is taken away by no adjustment.
 */
export function inputTerms(field: ErrorField): Term[] {
  const places = placesOf(field)
  const weights = field.points.map((point) => lineWeights(field, point.quantity))
  const conditions = field.conditions.length
  return field.inputs.map((input, i) => {
    const factors = field.conditions.map((condition) => factorOf(input, condition))
    const then = input.behaviour === 'resolution' ? 0 : factorOf(input, field.calibration)
    const [s0, s1] = field.adjusted.map((p) => slopeAt(p, i)) as [number, number]
    const slopes = new Float64Array(places.length)
    const residuals = {
      asBuilt: new Float64Array(places.length),
      zeroed: new Float64Array(places.length),
      calibrated: new Float64Array(places.length),
    }
    for (let p = 0; p < field.points.length; p++) {
      const slope = slopeAt(field.points[p], i)
      const [l0, l1] = weights[p]!
      const taken = then * (l0 * s0 + l1 * s1)
      for (let c = 0; c < conditions; c++) {
        const place = p * conditions + c
        const now = slope * factors[c]!
        slopes[place] = slope
        residuals.asBuilt[place] = now
        residuals.zeroed[place] = without(now, then * s0)
        residuals.calibrated[place] = without(now, taken)
      }
    }
    return {
      ...describe(input),
      mostFactor: Math.max(...factors.map(Math.abs)),
      calibrates: calibrates(field, weights, input, i),
      residuals,
      slopes,
      places,
    }
  })
}

/** Difference of two figures; what only rounding leaves of them is nothing. */
const without = (now: number, taken: number): number => {
  const rest = now - taken
  return Math.abs(rest) <= 1e-12 * Math.abs(now) ? 0 : rest
}

type Described = Pick<
  ErrorInput,
  'id' | 'label' | 'source' | 'path' | 'limit' | 'unit' | 'distribution' | 'group' | 'deviations'
>

/** The parts of a term that do not depend on where it is looked at. */
export function describe(
  input: Described,
): Omit<Term, 'mostFactor' | 'calibrates' | 'residuals' | 'slopes' | 'places'> {
  const { id, label, source, path, limit, unit, distribution, group } = input
  const cut = input.deviations ?? CUT
  const spread = (residual: number): Spread => {
    const half = Math.abs(residual) * limit
    return distribution === 'rectangular'
      ? { kind: 'rectangular', half }
      : { kind: 'normal', deviation: half / cut, cut }
  }
  return {
    id,
    label,
    source,
    path,
    limit,
    unit,
    distribution,
    group,
    deviation: deviationOf(spread(1)),
    spread,
  }
}

const slopeAt = (point: FieldPoint | undefined, input: number): number => point?.slopes[input] ?? 0

/** Below this share of an input's largest effect nothing counts as left. */
const GONE = 0.02

/** What an adjustment takes away at its own temperature: all over the span by a shift, by a straight line, or not. */
function calibrates(
  field: ErrorField,
  weights: readonly [number, number][],
  input: ErrorInput,
  i: number,
): BudgetLine['calibrates'] {
  if (input.behaviour === 'resolution') return 'none'
  const [s0, s1] = field.adjusted.map((p) => slopeAt(p, i)) as [number, number]
  let [most, byZero, bySpan] = [0, 0, 0]
  for (let p = 0; p < field.points.length; p++) {
    const slope = slopeAt(field.points[p], i)
    const [l0, l1] = weights[p]!
    most = Math.max(most, Math.abs(slope))
    byZero = Math.max(byZero, Math.abs(slope - s0))
    bySpan = Math.max(bySpan, Math.abs(slope - l0 * s0 - l1 * s1))
  }
  if (byZero <= GONE * most) return 'zero'
  return bySpan <= GONE * most ? 'span' : 'none'
}
