import { evaluateForm } from './evaluate.ts'
import type { Pair, ValueForm } from './forms.ts'
import { nearestFactor } from './ideal.ts'

/** Where the effect of a resistor is looked for, Ω. */
const PROBES = [1, 10, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8]
/** A value found from afar is found again from where it is, which mends its last digits. */
const REFINEMENTS = 3

/**
 * The continuous value of one resistor that brings both ends nearest to the target while the others stay as chosen, Ω.
 * Null where no finite value from 0 up is best (the others are so far off that it would have to be negative or left
 * open) or where the resistor has no effect.
 */
export function wantedValue(
  form: ValueForm,
  target: Pair,
  values: Record<string, number>,
  ref: string,
): number | null {
  const effect = new Effect(form, target, values, ref)
  // Far from the others' impedance a resistor has next to no effect, and nothing to reckon from.
  let base = values[ref] ?? 0
  let most = base > 0 && base < Infinity ? effect.strength(base) : 0
  for (const probe of PROBES) {
    const strength = effect.strength(probe)
    if (!(strength > 1.5 * most)) continue
    most = strength
    base = probe
  }
  if (most === 0) return null
  let wanted = effect.best(base)
  for (let i = 0; i < REFINEMENTS && wanted !== null && wanted > 0; i++)
    wanted = effect.best(wanted) ?? wanted
  return wanted
}

/**
 * What one resistor does to the ends. An ideal output is a Möbius function (a + b·R)/(c + d·R) of each single resistor,
 * with the same denominator at both ends, so three evaluations give it exactly and the best R follows in closed form.
 */
class Effect {
  private readonly form: ValueForm

  constructor(
    form: ValueForm,
    private readonly target: Pair,
    private readonly values: Record<string, number>,
    private readonly ref: string,
  ) {
    // Limits of a part's gain do not bend its equation.
    this.form =
      form.kind === 'gain-single' ? { ...form, gainMinimum: -Infinity, gainMaximum: Infinity } : form
  }

  /** How much of the output, or of the target if that is more, comes and goes between half and twice a value. */
  strength(value: number): number {
    const [twice, half] = [this.at(2 * value), this.at(value / 2)]
    const size = Math.max(...[...twice, ...half, ...this.target].map(Math.abs))
    return Math.max(Math.abs(twice[0] - half[0]), Math.abs(twice[1] - half[1])) / size || 0
  }

  /** The best value, Ω, reckoned from what happens around `base`, Ω; null unless it is finite and not below 0. */
  best(base: number): number | null {
    const [one, twice, half] = [this.at(base), this.at(2 * base), this.at(base / 2)]
    const up: Pair = [twice[0] - one[0], twice[1] - one[1]]
    const down: Pair = [one[0] - half[0], one[1] - half[1]]
    const end = Math.abs(up[0]) + Math.abs(down[0]) > Math.abs(up[1]) + Math.abs(down[1]) ? 0 : 1
    // With x = R/base: u(x) = u(1) + K·(x − 1)/(c + d·x), where r = up/down gives c : d = (2r − 1) : (2 − r) and
    // K = 3·up. Scaled by `down`, so that neither r nor its inverse has to exist.
    const c = 2 * up[end] - down[end]
    const d = 2 * down[end] - up[end]
    const slope: Pair = [3 * up[0] * down[end], 3 * up[1] * down[end]]
    const w = nearestFactor([one[0] - this.target[0], one[1] - this.target[1]], slope)
    const wanted = (base * (1 + c * w)) / (1 - d * w)
    return wanted >= 0 && wanted < Infinity ? wanted : null
  }

  private at(value: number): Pair {
    return evaluateForm(this.form, { ...this.values, [this.ref]: value })
  }
}
