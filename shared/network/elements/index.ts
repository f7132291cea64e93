import type { NetworkElement } from '../types.ts'
import { amplifier } from './amplifier.ts'
import { capacitor } from './capacitor.ts'
import { controlledVoltageSource } from './controlled-voltage-source.ts'
import { currentSource } from './current-source.ts'
import type { ElementKind, PortContext, PortName, Stamper } from './element-kind.ts'
import { resistor } from './resistor.ts'
import { voltageSource } from './voltage-source.ts'

/** The only list of element kinds; a kind without an entry does not compile. */
export const elementKinds: {
  [K in NetworkElement['kind']]: ElementKind<Extract<NetworkElement, { kind: K }>>
} = {
  resistor,
  capacitor,
  'voltage-source': voltageSource,
  'current-source': currentSource,
  'controlled-voltage-source': controlledVoltageSource,
  amplifier,
}

/** The definition of an element's kind. The cast: the table's key and the element's kind are the same literal. */
export const kindOf = (element: NetworkElement): ElementKind<NetworkElement> =>
  elementKinds[element.kind] as ElementKind<NetworkElement>

/** Stamps the derivative of the equations with respect to a port; a RangeError where the element has no such port. */
export function stampPort(
  element: NetworkElement,
  port: PortName,
  stamper: Stamper,
  context: PortContext = {},
) {
  const stamp = kindOf(element).ports[port]
  if (!stamp) throw new RangeError(`${element.ref} has no ${port}`)
  stamp(element, stamper, context)
}
