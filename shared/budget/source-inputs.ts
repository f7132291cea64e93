import type { Chain } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import type { ErrorInput } from './error-input.ts'

/** Volts per code. */
export const lsbOf = ({ converter }: Design): number =>
  (converter.input.high - converter.input.low) / 2 ** converter.bits

const minusOutput = (y: number): number => -y

/**
 * References, each one variable wherever it acts: on the sources that follow it, and where it scales the converter on the
 * code itself, y = v·Vref,nominal/Vref. A reference that is the positive rail has the rail's tolerance.
 */
export function referenceInputs(design: Design, chain: Chain): ErrorInput[] {
  const { converter, shift } = chain.references
  const given = { converterReference: design.converter.reference, shiftReference: design.shiftReference }
  const names = { converterReference: 'Converter reference', shiftReference: 'Shift reference' }
  const paths = { converterReference: 'converter.reference', shiftReference: 'shiftReference' }
  const own = (id: 'converterReference' | 'shiftReference'): ErrorInput[] => {
    const reference = given[id]
    if (converter?.variable !== id && shift?.variable !== id) return []
    const input = (
      key: 'tolerance' | 'drift' | 'ageing',
      label: string,
      behaviour: ErrorInput['behaviour'],
    ): ErrorInput => ({
      id: `${id}.${key}`,
      label: names[id] + label,
      source: id,
      path: `${paths[id]}.${key}`,
      limit: reference?.[key] ?? 0,
      unit: '',
      distribution: design.analysis.distribution,
      behaviour,
      group: null,
      effects: following(chain, id),
      onOutput: converter?.variable === id ? minusOutput : null,
    })
    return [
      input('tolerance', '', 'constant'),
      input('drift', ' over temperature', 'temperature'),
      input('ageing', ' ageing', 'ageing'),
    ].filter(({ effects, onOutput }) => effects.length > 0 || onOutput !== null)
  }
  return [...own('converterReference'), ...own('shiftReference')]
}

/** Sources that move with a variable, in proportion. */
const following = (chain: Chain, variable: string): ErrorInput['effects'] =>
  (chain.variables.find((v) => v.id === variable)?.injections ?? []).map(({ ref }) => ({
    ref,
    port: 'value',
    scale: 1,
    relative: true,
  }))

/** Rails where they act otherwise than by the amplifiers' supply rejection. */
export function railInputs(design: Design, chain: Chain): ErrorInput[] {
  const { rails } = design
  const scalesConverter = chain.references.converter?.variable === 'positiveRail'
  const effects = following(chain, 'positiveRail')
  if (!scalesConverter && effects.length <= 1) return []
  const rail = (
    id: string,
    label: string,
    path: string,
    limit: number,
    behaviour: ErrorInput['behaviour'],
  ): ErrorInput => ({
    id,
    label,
    source: 'positiveRail',
    path,
    limit,
    unit: '',
    distribution: design.analysis.distribution,
    behaviour,
    group: null,
    effects,
    onOutput: scalesConverter ? minusOutput : null,
  })
  return [
    rail('positiveRail.tolerance', 'Positive rail', 'rails.tolerance', rails.tolerance, 'constant'),
    rail(
      'positiveRail.ripple',
      'Ripple of the positive rail',
      'rails.ripple',
      rails.ripple / Math.abs(rails.positive),
      'resolution',
    ),
  ]
}

/** The common mode of a sensor moves as it will, at every reading. */
export function commonModeInputs(chain: Chain): ErrorInput[] {
  const variable = chain.variables.find(({ id }) => id === 'commonMode')
  if (!variable) return []
  return [
    {
      id: 'sensor.commonMode',
      label: 'Common mode of the sensor',
      source: 'sensor',
      path: 'sensor.commonMode',
      limit: (variable.high - variable.low) / 2,
      unit: 'V',
      distribution: 'rectangular',
      behaviour: 'resolution',
      group: null,
      effects: variable.injections.map(({ ref, scale }) => ({ ref, port: 'value', scale, relative: false })),
      onOutput: null,
    },
  ]
}

/** The converter's own errors, referred to its input; leakage of its pin acts through the network. */
export function converterInputs(design: Design): ErrorInput[] {
  const { converter } = design
  const lsb = lsbOf(design)
  const input = (
    id: string,
    label: string,
    field: string,
    limit: number,
    unit: string,
    behaviour: ErrorInput['behaviour'],
    onOutput: ErrorInput['onOutput'],
  ): ErrorInput => ({
    id: `converter.${id}`,
    label: `Converter ${label}`,
    source: 'converter',
    path: `converter.${field}`,
    limit,
    unit,
    distribution: design.analysis.distribution,
    behaviour,
    group: null,
    effects: [],
    onOutput,
  })
  const asIs = (y: number): number => y
  return [
    input('offset', 'offset', 'offsetError', converter.offsetError, 'V', 'constant', () => 1),
    input('offsetDrift', 'offset drift', 'offsetDrift', converter.offsetDrift, 'V', 'temperature', () => 1),
    input('gain', 'gain error', 'gainError', converter.gainError, '', 'constant', asIs),
    input('gainDrift', 'gain drift', 'gainDrift', converter.gainDrift, '', 'temperature', asIs),
    input('inl', 'nonlinearity', 'inl', converter.inl, 'LSB', 'resolution', () => lsb),
    {
      ...input('quantisation', 'quantisation', 'bits', 0.5, 'LSB', 'resolution', () => lsb),
      distribution: 'rectangular',
    },
    {
      ...input(
        'inputCurrent',
        'input current',
        'inputCurrent',
        converter.inputCurrent,
        'A',
        'constant',
        null,
      ),
      effects: [{ ref: 'IADC', port: 'value', scale: 1, relative: false }],
    },
  ]
}
