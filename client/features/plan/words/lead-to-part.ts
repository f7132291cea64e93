import type { Component } from '#shared/design/plan.ts'

/** The field that sets a part: its data where it is an amplifier, its value where it is bought, else who holds it. */
export function leadToPart(source: string, components: readonly Component[]): string {
  const part = components.find((known) => known.ref === source)
  if (part?.kind === 'amplifier') return 'parts.amplifier'
  if (part?.kind === 'instrumentation-amplifier') return 'parts.instrumentation'
  if (part && !part.fixed) return `choose.values.${source}`
  if (part) return part.stage === 'converter' ? 'converter.inputResistance' : 'sensor'
  const known: Readonly<Record<string, string>> = {
    shiftReference: 'shiftReference',
    converterReference: 'converter.reference',
    converter: 'converter',
    sensor: 'sensor',
    calibration: 'calibration',
  }
  return known[source] ?? (/rail/i.test(source) ? 'rails' : 'sensor')
}
