import type { CurrentSource } from '../types.ts'
import type { ElementKind } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

export const currentSource: ElementKind<CurrentSource> = {
  letter: 'I',
  nodes: (e) => [e.from, e.to],
  hasBranch: false,
  dcPaths: () => [],
  stamp: (e, stamper) => {
    stamper.addSource(stamper.node(e.from), -e.value, -(e.ac ?? 0))
    stamper.addSource(stamper.node(e.to), e.value, e.ac ?? 0)
  },
  ports: {
    value: (e, stamper) => {
      stamper.addSource(stamper.node(e.from), -1)
      stamper.addSource(stamper.node(e.to), 1)
    },
  },
  value: (e) => e.value,
  conductance: () => null,
  withValue: (e, value) => {
    if (!Number.isFinite(value))
      throw new RangeError(`${e.ref} is ${value} A; a source needs a finite current`)
    return { ...e, value }
  },
  check: () => null,
  loop: null,
  noise: () => [],
  toSpice: (e) => {
    const ac = e.ac ? ` AC ${toSpiceNumber(e.ac)}` : ''
    return [`${e.ref} ${e.from} ${e.to} DC ${toSpiceNumber(e.value)}${ac}`]
  },
  symbol: 'current-source',
}
