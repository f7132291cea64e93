import type { Capacitor } from '../types.ts'
import { stampAdmittance } from './admittance.ts'
import type { ElementKind } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

export const capacitor: ElementKind<Capacitor> = {
  letter: 'C',
  nodes: (e) => [e.a, e.b],
  hasBranch: false,
  dcPaths: () => [],
  stamp: (e, stamper) => stampAdmittance(stamper, e.a, e.b, 0, e.value),
  ports: { value: (e, stamper) => stampAdmittance(stamper, e.a, e.b, 0, 1) },
  value: (e) => e.value,
  conductance: () => null,
  withValue: (e, value) => {
    if (!(value > 0) || !Number.isFinite(value)) throw new RangeError(messageFor(e.ref, value))
    return { ...e, value }
  },
  check: (e) => (e.value > 0 ? null : messageFor(e.ref, e.value)),
  loop: null,
  noise: () => [],
  toSpice: (e) => [`${e.ref} ${e.a} ${e.b} ${toSpiceNumber(e.value)}`],
  symbol: 'capacitor',
}

const messageFor = (ref: string, value: number) =>
  `${ref} is ${value} F; a capacitor needs a finite value above 0 F`
