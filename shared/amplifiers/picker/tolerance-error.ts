import { evaluateForm } from './evaluate.ts'
import { formRefs, type Pair, type ValueForm } from './forms.ts'

/**
 * What the limits of the resistors do to the two ends, V: Σ |∂u/∂ln R|·tolerance over the form's own refs.
 *
 * Each ideal output is a Möbius function of each resistor, for which R·du/dR = 3·a·b/(a + b) holds exactly with
 * a = u(2R) − u(R) and b = u(R) − u(R/2). Matched pairs count as the form writes them; the result is the same as for
 * four independent resistors around a signal that is symmetrical about its level.
 */
export function toleranceErrors(
  form: ValueForm,
  values: Record<string, number>,
  tolerance: Record<string, number>,
  refs: readonly string[] = formRefs(form),
): Pair {
  const free = form.kind === 'gain-single' ? { ...form, gainMinimum: -Infinity, gainMaximum: Infinity } : form
  const total: Pair = [0, 0]
  const here = evaluateForm(free, values)
  const varied = { ...values }
  for (const ref of refs) {
    const value = values[ref]
    const limit = tolerance[ref] ?? 0
    if (value === undefined || !(value > 0 && value < Infinity) || limit === 0) continue
    varied[ref] = 2 * value
    const twice = evaluateForm(free, varied)
    varied[ref] = value / 2
    const half = evaluateForm(free, varied)
    varied[ref] = value
    for (const end of [0, 1] as const) {
      const a = twice[end] - here[end]
      const b = here[end] - half[end]
      if (a + b !== 0) total[end] += Math.abs((3 * a * b) / (a + b)) * limit
    }
  }
  return total
}
