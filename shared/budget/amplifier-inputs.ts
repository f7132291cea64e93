import type { AmplifierErrors } from '#shared/amplifiers/stage-builder.ts'
import { sensorEnds, type Chain } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier } from '#shared/network/types.ts'
import type { ErrorInput } from './error-input.ts'

type Effect = ErrorInput['effects'][number]

/**
 * Amplifiers: offset and its drift, bias current and the difference of the two, common-mode and supply rejection, finite
 * loop gain. Open-loop gain is a typical figure: from half of it to infinity, 1/A lies within ±1/a0 of nominal. An
 * integrated part has its own gain error, drift and nonlinearity in place of loop gain.
 */
export function amplifierInputs(design: Design, chain: Chain): ErrorInput[] {
  const plain = chain.network.elements.flatMap((e) => (e.kind === 'amplifier' && !e.macro ? [e] : []))
  return [
    ...chain.errors.flatMap((e) => [...commonInputs(design, e), ...integratedInputs(design, e)]),
    ...plain.map((u) => loopGainInput(u)),
  ]
}

function commonInputs(design: Design, e: AmplifierErrors): ErrorInput[] {
  const { rails } = design
  const make = inputOf(design, e)
  const vos: Effect[] = [{ ref: e.ref, port: 'vos', scale: 1, relative: false }]
  const mate = e.integrated?.mate
  const into = (plus: number, minus: number): Effect[] => [
    { ref: e.ref, port: 'ib+', scale: plus, relative: false },
    mate
      ? { ref: mate, port: 'ib+', scale: minus, relative: false }
      : { ref: e.ref, port: 'ib-', scale: minus, relative: false },
  ]
  const supply = (Math.abs(rails.positive) + Math.abs(rails.negative)) * rails.tolerance
  return [
    make('vos', 'offset voltage', mate ? 'vosIn' : 'vos', e.vos, 'V', vos),
    {
      ...make('vosDrift', 'offset drift', mate ? 'vosInDrift' : 'vosDrift', e.vosDrift, 'V', vos),
      behaviour: 'temperature',
    },
    {
      ...make('ib', 'bias current', 'ib', Math.abs(e.bias), 'A', into(1, 1)),
      behaviour: 'bias',
      doubling: e.doubling,
    },
    {
      ...make('ios', 'offset current', 'ios', e.ios, 'A', into(0.5, -0.5)),
      behaviour: 'bias-mismatch',
      doubling: e.doubling,
    },
    make('cmrr', 'common-mode rejection', 'cmrr', e.cmrr, '', [
      { ref: e.ref, port: 'cmrr', scale: 1, relative: false },
    ]),
    make('psrr', 'supply rejection', 'psrr', e.psrr * supply, 'V', vos),
    // Ripple is another at every reading.
    {
      ...make('ripple', 'rejection of ripple', 'psrr', e.psrr * 2 * rails.ripple, 'V', vos),
      behaviour: 'resolution',
    },
  ]
}

function integratedInputs(design: Design, e: AmplifierErrors): ErrorInput[] {
  const own = e.integrated
  if (!own) return []
  const make = inputOf(design, e)
  const gain: Effect[] = [{ ref: own.output, port: 'value', scale: 1, relative: true }]
  const { low, high } = sensorEnds(design)
  // A fraction of the output's span is the same fraction of the signal's at the input.
  const span: Effect[] = [{ ref: e.ref, port: 'vos', scale: Math.abs(high - low), relative: false }]
  return [
    make('gain', 'gain error', 'gainError', own.gainError, '', gain),
    {
      ...make('gainDrift', 'gain over temperature', 'gainDrift', own.gainDrift, '', gain),
      behaviour: 'temperature',
    },
    {
      ...make('nonlinearity', 'nonlinearity', 'nonlinearity', own.nonlinearity, '', span),
      behaviour: 'resolution',
    },
  ]
}

function loopGainInput({ ref, part }: Amplifier): ErrorInput {
  return {
    id: `${ref}.loopGain`,
    label: `${ref} finite loop gain`,
    source: ref,
    path: 'parts.amplifier.a0',
    limit: 1 / part.a0,
    unit: '',
    distribution: 'rectangular',
    behaviour: 'constant',
    group: null,
    effects: [{ ref, port: 'loopGain', scale: 1, relative: false }],
    onOutput: null,
  }
}

type Make = (
  id: string,
  label: string,
  field: string,
  limit: number,
  unit: string,
  effects: Effect[],
) => ErrorInput

function inputOf(design: Design, e: AmplifierErrors): Make {
  const ref = e.integrated?.part ?? e.ref
  const part = e.integrated ? 'parts.instrumentation' : 'parts.amplifier'
  return (id, label, field, limit, unit, effects) => ({
    id: `${ref}.${id}`,
    label: `${ref} ${label}`,
    source: ref,
    path: `${part}.${field}`,
    limit,
    unit,
    distribution: design.analysis.distribution,
    behaviour: 'constant',
    group: null,
    effects,
    onOutput: null,
  })
}
