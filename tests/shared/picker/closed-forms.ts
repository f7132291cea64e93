import type { LevelForm, ValueForm } from '#shared/amplifiers/picker/index.ts'

/**
 * Gain and offset of every arrangement as the handbooks print them (parallel resistances, no ratios), source and
 * reference resistance added to their legs: a second, independent statement of what the picker evaluates.
 */
export function closedForm(
  form: ValueForm,
): (values: Record<string, number>) => { gain: number; offset: number } {
  const rs = form.source ?? 0
  const v = 'reference' in form ? form.reference : 0
  const rv = 'referenceResistance' in form ? (form.referenceResistance ?? 0) : 0
  const at = (values: Record<string, number>, ref: string): number => values[ref] ?? Infinity
  switch (form.kind) {
    case 'attenuator':
      return (x) => ({ gain: share(at(x, 'R1') + rs, at(x, 'R2')), offset: 0 })
    case 'level-shift':
      return (x) => {
        const [r1, r2, r3] = [at(x, 'R1') + rs, at(x, 'R2') + rv, at(x, 'R3')]
        return { gain: share(r1, parallel(r2, r3)), offset: v * share(r2, parallel(r1, r3)) }
      }
    case 'non-inverting':
      return (x) => ({ gain: 1 + over(at(x, 'Rf'), at(x, 'Rg')), offset: 0 })
    case 'non-inverting-up':
      return (x) => {
        const [r1, r2] = [at(x, 'R1') + rs, at(x, 'R2') + rv]
        const noise = 1 + over(at(x, 'Rf'), at(x, 'Rg'))
        return { gain: share(r1, r2) * noise, offset: v * share(r2, r1) * noise }
      }
    case 'non-inverting-down':
      return (x) => {
        const [r1, r2] = [at(x, 'R1') + rv, at(x, 'R2')]
        const turns = over(at(x, 'Rf'), at(x, 'Rg') + parallel(r1, r2))
        return { gain: 1 + turns, offset: -v * share(r1, r2) * turns }
      }
    case 'weighted-difference':
      return (x) => {
        const back = over(at(x, 'R2'), at(x, 'R1') + rv)
        return { gain: share(at(x, 'R3') + rs, at(x, 'R4')) * (1 + back), offset: -v * back }
      }
    case 'inverting':
      return (x) => ({ gain: -over(at(x, 'Rf'), at(x, 'Rg') + rs), offset: 0 })
    case 'inverting-up':
      return (x) => {
        const back = over(at(x, 'Rf'), at(x, 'Rg') + rs)
        return { gain: -back, offset: v * share(at(x, 'R1') + rv, at(x, 'R2')) * (1 + back) }
      }
    case 'inverting-down':
      return (x) => ({
        gain: -over(at(x, 'Rf'), at(x, 'Rg') + rs),
        offset: -v * over(at(x, 'Rf'), at(x, 'Rs') + rv),
      })
    case 'difference':
      return (x) => ({ gain: over(at(x, 'R2'), at(x, 'R1') + rs), offset: level(form.level, x) })
    case 'gain-pair':
      return (x) => ({
        gain:
          (form.stageGain ?? 1) *
          (1 + over((form.factor ?? 2) * at(x, form.upper ?? 'R1'), at(x, form.lower ?? 'Rg'))),
        offset: level(form.level, x),
      })
    case 'gain-single':
      return (x) => {
        const gain = (form.stageGain ?? 1) * (1 + over(form.k, at(x, 'Rg')))
        const possible = gain >= (form.gainMinimum ?? 0) && gain <= (form.gainMaximum ?? Infinity)
        return { gain: possible ? gain : NaN, offset: level(form.level, x) }
      }
    case 'two-amplifier':
      return (x) => ({
        gain: form.withGainResistor
          ? 1 + 1 + over(2 * at(x, 'R2'), at(x, 'Rg'))
          : 1 + over(at(x, 'R2'), at(x, 'R1')),
        offset: level(form.level, x),
      })
  }
}

function level(form: LevelForm, x: Record<string, number>): number {
  if ('volts' in form) return form.volts
  const upper = (x[form.upper ?? 'R7'] ?? Infinity) + (form.referenceResistance ?? 0)
  return form.reference * share(upper, x[form.lower ?? 'R8'] ?? Infinity)
}

function parallel(a: number, b: number): number {
  if (a === Infinity) return b
  if (b === Infinity) return a
  return (a * b) / (a + b)
}

/** Part of a voltage across `lower` of a divider; an open upper leg leaves nothing, an open lower one everything. */
function share(upper: number, lower: number): number {
  if (upper === Infinity) return lower === Infinity ? NaN : 0
  return lower === Infinity ? 1 : lower / (upper + lower)
}

function over(a: number, b: number): number {
  if (b === Infinity) return a === Infinity ? NaN : 0
  return a / b
}
