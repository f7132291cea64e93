import type { Resistor } from '../types.ts'
import { stampAdmittance } from './admittance.ts'
import type { ElementKind } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

export const resistor: ElementKind<Resistor> = {
  letter: 'R',
  nodes: (e) => [e.a, e.b],
  hasBranch: false,
  dcPaths: (e) => [[e.a, e.b]],
  stamp: (e, stamper) => stampAdmittance(stamper, e.a, e.b, 1 / e.value),
  ports: { value: (e, stamper) => stampAdmittance(stamper, e.a, e.b, -1 / e.value ** 2) },
  value: (e) => e.value,
  conductance: (e) => ({ a: e.a, b: e.b, value: 1 / e.value }),
  withValue: (e, value) => {
    if (!(value > 0) || !Number.isFinite(value)) throw new RangeError(messageFor(e.ref, value))
    return { ...e, value }
  },
  check: (e) => (e.value > 0 ? null : messageFor(e.ref, e.value)),
  loop: null,
  noise: (e, temperature) =>
    e.noiseless
      ? []
      : [
          {
            name: 'thermal',
            density: (4 * BOLTZMANN * temperature) / e.value,
            corner: 0,
            inject: (stamper) => {
              stamper.addSource(stamper.node(e.a), 1)
              stamper.addSource(stamper.node(e.b), -1)
            },
          },
        ],
  toSpice: (e) => [`${e.ref} ${e.a} ${e.b} ${toSpiceNumber(e.value)}`],
  symbol: 'resistor',
}

/** J/K, exact (SI 2019). */
const BOLTZMANN = 1.380649e-23

const messageFor = (ref: string, value: number) =>
  `${ref} is ${value} Ω; a resistor needs a finite value above 0 Ω`
