import { type LevelForm, levelRefs, type Pair, pairRefs, type ValueForm } from './forms.ts'

/**
 * Output at the two ends of the measurand, V, by the form's own equation with ideal amplifiers (engine's table of
 * arrangements; source, Thevenin and reference resistances included).
 *
 * @param values Ω by ref; an absent ref is open, 0 is a link. A combination without a meaning gives NaN.
 */
export function evaluateForm(form: ValueForm, values: Record<string, number>): Pair {
  const value = (ref: string): number => values[ref] ?? Infinity
  return [endPoint(form, value, 0), endPoint(form, value, 1)]
}

/** One end of the form, V. Written with ratios so that open (∞) and link (0) need no cases of their own. */
function endPoint(form: ValueForm, value: (ref: string) => number, end: 0 | 1): number {
  const s = form.signal[end]
  const rs = form.source ?? 0
  switch (form.kind) {
    case 'attenuator':
      return s / (1 + (value('R1') + rs) / value('R2'))
    case 'level-shift': {
      const x = (value('R1') + rs) / (value('R2') + (form.referenceResistance ?? 0))
      const y = (value('R1') + rs) / value('R3')
      return (s + form.reference * x) / (1 + x + y)
    }
    case 'non-inverting':
      return s * (1 + value('Rf') / value('Rg'))
    case 'non-inverting-up': {
      const rho = (value('R1') + rs) / (value('R2') + (form.referenceResistance ?? 0))
      return ((s + form.reference * rho) / (1 + rho)) * (1 + value('Rf') / value('Rg'))
    }
    case 'non-inverting-down': {
      const upper = value('R1') + (form.referenceResistance ?? 0)
      const thevenin = 1 / (1 / upper + 1 / value('R2'))
      const h = 1 / (1 + upper / value('R2'))
      return s + (value('Rf') / (value('Rg') + thevenin)) * (s - form.reference * h)
    }
    case 'weighted-difference': {
      const k = value('R2') / (value('R1') + (form.referenceResistance ?? 0))
      const a = 1 / (1 + (value('R3') + rs) / value('R4'))
      return s * a * (1 + k) - form.reference * k
    }
    case 'inverting':
      return (-s * value('Rf')) / (value('Rg') + rs)
    case 'inverting-up': {
      const nu = value('Rf') / (value('Rg') + rs)
      const h = 1 / (1 + (value('R1') + (form.referenceResistance ?? 0)) / value('R2'))
      return -nu * s + form.reference * h * (1 + nu)
    }
    case 'inverting-down': {
      const nu = value('Rf') / (value('Rg') + rs)
      return -nu * s - (form.reference * value('Rf')) / (value('Rs') + (form.referenceResistance ?? 0))
    }
    case 'difference':
      return s * (value('R2') / (value('R1') + rs)) + level(form.level, value)
    case 'gain-pair': {
      const { upper, lower } = pairRefs(form)
      const gain = (form.stageGain ?? 1) * (1 + ((form.factor ?? 2) * value(upper)) / value(lower))
      return s * gain + level(form.level, value)
    }
    case 'gain-single': {
      const gain = (form.stageGain ?? 1) * (1 + form.k / value('Rg'))
      return gain < (form.gainMinimum ?? -Infinity) || gain > (form.gainMaximum ?? Infinity)
        ? NaN
        : s * gain + level(form.level, value)
    }
    case 'two-amplifier': {
      const gain = form.withGainResistor ? 2 * (1 + value('R2') / value('Rg')) : 1 + value('R2') / value('R1')
      return s * gain + level(form.level, value)
    }
  }
}

function level(form: LevelForm, value: (ref: string) => number): number {
  if ('volts' in form) return form.volts
  const { upper, lower } = levelRefs(form)
  return form.reference / (1 + (value(upper) + (form.referenceResistance ?? 0)) / value(lower))
}
