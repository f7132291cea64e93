/*
 * The two second-order sections, cascaded, each with a gain of 1 at 0 Hz (the second inverts). With x = √(B/A),
 *
 *   f0 = 1/(2π·√(A·B·C1·C2)),   Q = √(C1/C2)/(m·x + 1/x)
 *
 *   sallen-key           A = R1 (from the signal), B = R2, C1 to the output, C2 to ground; m = 1
 *   multiple-feedback    A = R3 (from the output), B = R2 (to the − input), C1 to ground, C2 from the output;
 *                        m = 1 + |H0|, |H0| = R3/R1
 *
 * Source: method of the two circuits in any handbook of active filters, e.g. Franco, Design with Operational Amplifiers
 * and Analog Integrated Circuits, chapter 3.
 */

export type SectionKind = 'sallen-key' | 'multiple-feedback'

/** Parts of a section by their own names: R1, R2, (R3,) C1, C2; Ω and F. */
export type SectionValues = { R1: number; R2: number; R3?: number; C1: number; C2: number }

/** f0 (Hz) and Q of a section with an ideal amplifier. */
export function sectionOf({ R1, R2, R3, C1, C2 }: SectionValues): { f0: number; q: number } {
  const a = R3 ?? R1
  const m = R3 === undefined ? 1 : 1 + R3 / R1
  const x = Math.sqrt(R2 / a)
  return {
    f0: 1 / (2 * Math.PI * Math.sqrt(a * R2 * C1 * C2)),
    q: Math.sqrt(C1 / C2) / (m * x + 1 / x),
  }
}

/**
 * Resistances that would give f0 and Q exactly with two capacitors, on the side where `near` lies; null where C1/C2 is
 * below 4·m·Q².
 */
export function wantedResistors(
  kind: SectionKind,
  wanted: { f0: number; q: number },
  near: SectionValues,
): Record<string, number> | null {
  const { C1, C2 } = near
  const m = kind === 'sallen-key' ? 1 : 1 + (near.R3 ?? near.R1) / near.R1
  const g = Math.sqrt(C1 / C2) / wanted.q
  if (g < 2 * Math.sqrt(m)) return null
  const root = Math.sqrt(g * g - 4 * m)
  const a = near.R3 ?? near.R1
  const x = (near.R2 / a) * m >= 1 ? (g + root) / (2 * m) : (g - root) / (2 * m)
  const middle = 1 / (2 * Math.PI * wanted.f0 * Math.sqrt(C1 * C2))
  const [A, B] = [middle / x, middle * x]
  return kind === 'sallen-key' ? { R1: A, R2: B } : { R1: A / (m - 1), R2: B, R3: A }
}

/** Larger of the relative errors of f0 and Q. */
export function sectionError(real: { f0: number; q: number }, wanted: { f0: number; q: number }): number {
  return Math.max(Math.abs(real.f0 / wanted.f0 - 1), Math.abs(real.q / wanted.q - 1))
}

/**
 * What tolerances can do to f0 or Q together, first order: Σ |∂ln f0/∂ln p|·t, the larger of the two (method:
 * tolerance statistics, worst case).
 */
export function toleranceError(
  values: SectionValues,
  tolerance: { resistor: number; capacitor: number },
): number {
  const step = 1e-6
  let [f0, q] = [0, 0]
  for (const [name, value] of Object.entries(values) as [keyof SectionValues, number][]) {
    const up = sectionOf({ ...values, [name]: value * (1 + step) })
    const down = sectionOf({ ...values, [name]: value * (1 - step) })
    const limit = name.startsWith('R') ? tolerance.resistor : tolerance.capacitor
    f0 += (Math.abs(Math.log(up.f0 / down.f0)) / (2 * step)) * limit
    q += (Math.abs(Math.log(up.q / down.q)) / (2 * step)) * limit
  }
  return Math.max(f0, q)
}
