import { evaluateForm } from './evaluate.ts'
import { type Pair, type ValueForm } from './forms.ts'
import { nearestFactor } from './ideal.ts'

/**
 * The continuous value of one resistor that brings both ends nearest to the target while the others stay as chosen, Ω;
 * 0 for a link. Null where no finite positive value is best (the others are so far off that the resistor would have to
 * be negative or left open) or where it has no effect.
 *
 * An ideal output is a Möbius function (a + b·R)/(c + d·R) of each single resistor, with the same denominator at both
 * ends, so three evaluations give it exactly and the best R follows in closed form.
 */
export function wantedValue(
  form: ValueForm,
  target: Pair,
  values: Record<string, number>,
  ref: string,
): number | null {
  const chosen = values[ref]
  const base = chosen !== undefined && chosen > 0 && chosen < Infinity ? chosen : typical(values)
  const free = unbounded(form)
  const at = (factor: number): Pair => evaluateForm(free, { ...values, [ref]: base * factor })
  const [one, twice, half] = [at(1), at(2), at(0.5)]
  const up: Pair = [twice[0] - one[0], twice[1] - one[1]]
  const down: Pair = [one[0] - half[0], one[1] - half[1]]
  const end = Math.abs(up[0]) + Math.abs(down[0]) > Math.abs(up[1]) + Math.abs(down[1]) ? 0 : 1
  if (!(Math.abs(up[end]) + Math.abs(down[end]) > 0)) return null

  // With x = R/base: u(x) = u(1) + K·(x − 1)/(c + d·x), where r = up/down gives c : d = (2r − 1) : (2 − r) and K = 3·up.
  // Scaled by `down` so that neither r nor its inverse has to exist.
  const c = 2 * up[end] - down[end]
  const d = 2 * down[end] - up[end]
  const slope: Pair = [3 * up[0] * down[end], 3 * up[1] * down[end]]
  const w = nearestFactor([one[0] - target[0], one[1] - target[1]], slope)
  const x = (1 + c * w) / (1 - d * w)
  const wanted = x * base
  if (!Number.isFinite(wanted) || wanted < 0) return null
  return wanted
}

/** Limits of a part's gain do not bend its equation. */
function unbounded(form: ValueForm): ValueForm {
  if (form.kind !== 'gain-single') return form
  return { ...form, gainMinimum: -Infinity, gainMaximum: Infinity }
}

function typical(values: Record<string, number>): number {
  const finite = Object.values(values).filter((value) => value > 0 && value < Infinity)
  if (finite.length === 0) return 1e4
  return Math.exp(finite.reduce((sum, value) => sum + Math.log(value), 0) / finite.length)
}
