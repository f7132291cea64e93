import type { Chain } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Resistor } from '#shared/network/types.ts'
import type { ErrorInput } from './error-input.ts'

/** Inputs of resistors that move together because one class states how well they keep to each other. */
export const RESISTOR_GROUP = 'resistors'

/** Share of a reference's output resistance that is uncertain: data sheets give it as a typical figure at best. */
const LOADING = 1

/**
 * Resistors: initial tolerance, temperature coefficient, ageing and self-heating of each. Where the class states tracking
 * (or a ratio tolerance) the resistors have the drift (or the tolerance) in common, and each its own ± half of the
 * difference that two may show; both together stay inside the limit that every resistor keeps.
 */
export function resistorInputs(
  design: Design,
  chain: Chain,
  voltage: (node: string) => number,
): ErrorInput[] {
  const all = chain.network.elements.flatMap((e) => (e.kind === 'resistor' ? [e] : []))
  const classed = all.filter((e) => !e.fixed)
  const inputs = new ResistorInputs(design)
  return [
    ...inputs.limits(classed, 'tolerance'),
    ...inputs.limits(classed, 'drift'),
    ...classed.map((e) => inputs.ageing(e)),
    ...classed.map((e) => inputs.selfHeating(e, voltage(e.a) - voltage(e.b))),
    // Internal resistors of an integrated part are told by the part's own gain error.
    ...all
      .filter((e) => e.fixed && e.group !== 'internal' && e.tolerance > 0)
      .map((e) => inputs.imbalance(e)),
    ...all.filter((e) => e.ref === 'RREF').map((e) => inputs.loading(e)),
  ]
}

const words = {
  tolerance: {
    id: 'initial',
    label: 'tolerance',
    shared: 'Tolerance that all resistors share',
    own: 'ratio',
    apart: 'against the others',
    apartPath: 'parts.resistors.ratioTolerance',
    behaviour: 'constant',
  },
  drift: {
    id: 'temperature',
    label: 'over temperature',
    shared: 'Drift that all resistors share',
    own: 'tracking',
    apart: 'tracking',
    apartPath: 'parts.resistors.tracking',
    behaviour: 'temperature',
  },
} as const

class ResistorInputs {
  private readonly parts: Design['parts']['resistors']
  private readonly distribution: ErrorInput['distribution']

  constructor(design: Design) {
    this.parts = design.parts.resistors
    this.distribution = design.analysis.distribution
  }

  /** Tolerance or drift of every resistor of the class, in common and apart where the class says how far apart. */
  limits(resistors: readonly Resistor[], key: 'tolerance' | 'drift'): ErrorInput[] {
    const { id, label, shared, own, apart, apartPath, behaviour } = words[key]
    const difference = key === 'tolerance' ? this.parts.ratioTolerance : this.parts.tracking
    const path = `parts.resistors.${key}`
    if (difference === undefined)
      return resistors.map((e) => this.input([e], `${e.ref}.${id}`, label, path, e[key], behaviour))
    const limit = Math.max(0, ...resistors.map((e) => e[key]))
    const alone = Math.min(difference / 2, limit)
    return [
      {
        ...this.input(resistors, `resistors.${id}`, '', path, limit - alone, behaviour),
        label: shared,
        source: RESISTOR_GROUP,
        group: RESISTOR_GROUP,
      },
      ...resistors.map((e) => this.input([e], `${e.ref}.${own}`, apart, apartPath, alone, behaviour)),
    ]
  }

  ageing(e: Resistor): ErrorInput {
    return this.input([e], `${e.ref}.ageing`, 'ageing', 'parts.resistors.ageing', this.parts.ageing, 'ageing')
  }

  /** Power at this operating point × thermal resistance × temperature coefficient; x is the coefficient, 1/K. */
  selfHeating(e: Resistor, across: number): ErrorInput {
    const { thermalResistance } = this.parts
    const kelvins = (across ** 2 / e.value) * thermalResistance
    const input = this.input(
      [e],
      `${e.ref}.selfHeating`,
      'self-heating',
      'parts.resistors.drift',
      thermalResistance > 0 ? e.drift : 0,
      'constant',
    )
    return {
      ...input,
      unit: '1/K',
      effects: input.effects.map((effect) => ({ ...effect, scale: kelvins })),
    }
  }

  /** Legs of a source, which differ by no more than their mismatch. */
  imbalance(e: Resistor): ErrorInput {
    return {
      ...this.input([e], `${e.ref}.initial`, 'mismatch', 'sensor.sourceMismatch', e.tolerance, 'constant'),
      source: 'sensor',
    }
  }

  loading(e: Resistor): ErrorInput {
    return {
      ...this.input([e], 'shiftReference.loading', '', null, LOADING, 'constant'),
      label: 'Loading of the reference',
      source: 'shiftReference',
      path: 'shiftReference.outputResistance',
      distribution: 'rectangular',
    }
  }

  private input(
    resistors: readonly Resistor[],
    id: string,
    label: string,
    path: string | null,
    limit: number,
    behaviour: ErrorInput['behaviour'],
  ): ErrorInput {
    const ref = resistors[0]?.ref ?? ''
    return {
      id,
      label: `${ref} ${label}`,
      source: ref,
      path,
      limit,
      unit: '',
      distribution: this.distribution,
      behaviour,
      group: null,
      effects: resistors.map((e) => ({ ref: e.ref, port: 'value', scale: 1, relative: true })),
      onOutput: null,
    }
  }
}
