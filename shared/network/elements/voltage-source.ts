import type { VoltageSource } from '../types.ts'
import { stampBranch } from './admittance.ts'
import type { ElementKind } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

export const voltageSource: ElementKind<VoltageSource> = {
  letter: 'V',
  nodes: (e) => [e.p, e.n],
  hasBranch: true,
  dcPaths: (e) => [[e.p, e.n]],
  stamp: (e, stamper) => {
    const branch = stamper.branch(e.ref)
    stampBranch(stamper, branch, stamper.node(e.p), stamper.node(e.n))
    stamper.addSource(branch, e.value, e.ac ?? 0)
  },
  ports: { value: (e, stamper) => stamper.addSource(stamper.branch(e.ref), 1) },
  value: (e) => e.value,
  conductance: () => null,
  withValue: (e, value) => {
    if (!Number.isFinite(value))
      throw new RangeError(`${e.ref} is ${value} V; a source needs a finite voltage`)
    return { ...e, value }
  },
  check: () => null,
  loop: null,
  noise: () => [],
  toSpice: (e) => {
    const ac = e.ac ? ` AC ${toSpiceNumber(e.ac)}` : ''
    return [`${e.ref} ${e.p} ${e.n} DC ${toSpiceNumber(e.value)}${ac}`]
  },
  symbol: 'voltage-source',
}
