/**
 * Classes of parts that a workshop can have: limits as common practice has them, under the project's own names. No
 * maker's part is meant. They say whether a better part exists, not which one.
 */

export interface PartClass {
  name: string
  /** Limits by the last two words of the field they set, SI units. */
  limits: Readonly<Record<string, number>>
}

const resistor = (name: string, tolerance: number, drift: number): PartClass => ({
  name,
  limits: { 'resistors.tolerance': tolerance, 'resistors.drift': drift },
})

const amplifier = (
  name: string,
  [vos, vosDrift, ib, ios]: [number, number, number, number],
  [cmrr, a0]: [number, number],
): PartClass => ({
  name,
  limits: {
    'amplifier.vos': vos,
    'amplifier.vosDrift': vosDrift,
    'amplifier.ib': ib,
    'amplifier.ios': ios,
    'amplifier.cmrr': 10 ** (-cmrr / 20),
    'amplifier.a0': 1 / a0,
  },
})

const reference = (name: string, tolerance: number, drift: number, ageing: number): PartClass => ({
  name,
  limits: {
    'reference.tolerance': tolerance,
    'reference.drift': drift,
    'reference.ageing': ageing,
    'shiftReference.tolerance': tolerance,
    'shiftReference.drift': drift,
    'shiftReference.ageing': ageing,
  },
})

/** From the most common to the best. */
export const partClasses: readonly PartClass[] = [
  resistor('1 % thick-film resistor', 1e-2, 1e-4),
  resistor('0.5 % resistor', 5e-3, 5e-5),
  resistor('0.1 % thin-film resistor', 1e-3, 2.5e-5),
  resistor('0.05 % thin-film resistor', 5e-4, 1e-5),
  resistor('0.02 % precision resistor', 2e-4, 5e-6),
  resistor('0.01 % foil resistor', 1e-4, 2e-6),
  amplifier('general-purpose amplifier', [5e-3, 1e-5, 1e-9, 5e-10], [80, 1e5]),
  amplifier('precision amplifier', [1e-4, 1e-6, 5e-11, 2e-11], [110, 1e6]),
  amplifier('zero-drift amplifier', [5e-6, 5e-8, 2e-10, 4e-10], [130, 1e7]),
  reference('0.1 % reference, 25 ppm/K', 1e-3, 2.5e-5, 1e-4),
  reference('0.05 % reference, 10 ppm/K', 5e-4, 1e-5, 5e-5),
  reference('0.02 % reference, 3 ppm/K', 2e-4, 3e-6, 2.5e-5),
]

/** The limit that a class states for a field of the design (its path); undefined where it states none. */
export const limitFor = ({ limits }: PartClass, path: string): number | undefined =>
  limits[path.split('.').slice(-2).join('.')]

/** Classes that state a limit for a field of the design, the loosest first. */
export const classesFor = (path: string): { part: PartClass; limit: number }[] =>
  partClasses
    .flatMap((part) => {
      const limit = limitFor(part, path)
      return limit === undefined ? [] : [{ part, limit }]
    })
    .sort((a, b) => b.limit - a.limit)
