import type { ControlledVoltageSource } from '../types.ts'
import { stampBranch } from './admittance.ts'
import type { ElementKind } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

export const controlledVoltageSource: ElementKind<ControlledVoltageSource> = {
  letter: 'E',
  nodes: (e) => [e.p, e.n, e.cp, e.cn],
  hasBranch: true,
  dcPaths: (e) => [[e.p, e.n]],
  stamp: (e, stamper) => {
    const branch = stamper.branch(e.ref)
    stampBranch(stamper, branch, stamper.node(e.p), stamper.node(e.n))
    stamper.add(branch, stamper.node(e.cp), -e.gain)
    stamper.add(branch, stamper.node(e.cn), e.gain)
  },
  ports: {
    value: (e, stamper) => {
      stamper.add(stamper.branch(e.ref), stamper.node(e.cp), -1)
      stamper.add(stamper.branch(e.ref), stamper.node(e.cn), 1)
    },
  },
  value: (e) => e.gain,
  conductance: () => null,
  withValue: (e, value) => {
    if (!Number.isFinite(value)) throw new RangeError(`${e.ref} has gain ${value}; it needs a finite gain`)
    return { ...e, gain: value }
  },
  check: () => null,
  loop: null,
  noise: () => [],
  toSpice: (e) => [`${e.ref} ${e.p} ${e.n} ${e.cp} ${e.cn} ${toSpiceNumber(e.gain)}`],
  symbol: 'controlled-source',
}
