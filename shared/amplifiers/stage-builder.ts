import type { NetworkBuilder } from '#shared/network/builder.ts'
import type { AmplifierPart } from '#shared/network/types.ts'
import type { Design } from '#shared/design/schema.ts'

/**
 * A pin or internal node whose voltage must stay inside a region set by the supply: between V(vneg) + `low` and
 * V(vpos) − `high`. `swing` adds the volts lost per ampere sunk and sourced at an output.
 */
export interface Pin {
  name: string
  node: string
  stage: string
  role: 'input' | 'output' | 'internal'
  low: number
  high: number
  /**
   * Node whose voltage is judged in its place. The − input of an amplifier in its linear region follows its + input
   * to within the offset, and input ranges are specified for the common mode of both.
   */
  judged?: string
  swing?: { ref: string; low: number; high: number }
}

/** Limits of one amplifier's error sources, for the tolerance box and the budget. SI units, at 25 °C. */
export interface AmplifierErrors {
  ref: string
  vos: number
  /** V/K */
  vosDrift: number
  /** Bias current as the network has it. */
  bias: number
  ios: number
  /** Kelvins for both currents to double; 0 constant. */
  doubling: number
  /** What an integrated part has besides: its two halves are one amplifier to people. */
  integrated?: {
    /** Designator of the whole part. */
    part: string
    /** The other half, whose + input is the part's − input. */
    mate: string
    /** Source that gives the output: its gain carries the part's gain error. */
    output: string
    gain: number
    gainError: number
    /** 1/K */
    gainDrift: number
    /** Fraction of the signal's span. */
    nonlinearity: number
  }
  /** 1/CMRR and 1/PSRR as ratios. */
  cmrr: number
  psrr: number
  /** Common mode at which the offset is given, V. */
  reference: number
}

/** Designator of the capacitor from an amplifier's output to its − input; `choose.values` takes it by this name. */
export const feedbackRef = (amplifier: string): string => `C${amplifier}`

/** Collects what the arrangements of a chain add, under the names of one stage. */
export class StageBuilder {
  readonly pins: Pin[] = []
  readonly errors: AmplifierErrors[] = []

  constructor(
    readonly network: NetworkBuilder,
    private readonly counter: { amplifiers: number },
    readonly design: Design,
    /** `S1`, `S2`. */
    readonly stage: string,
    /** Added to each resistor's designator: '' or 'B' for the second stage. */
    readonly suffix: string,
    readonly nodes: { p: string; n: string | null; out: string },
  ) {}

  /** A node inside this stage. */
  node(name: string): string {
    return this.suffix ? `${name}_${this.suffix.toLowerCase()}` : name
  }

  ref(name: string): string {
    return name + this.suffix
  }

  /** A resistor from the series, with the tolerance of the design's class; absent (undefined) leaves it open. */
  resistor(name: string, a: string, b: string, value: number | undefined, stage = this.stage): void {
    if (value === undefined) return
    const { tolerance, drift } = this.design.parts.resistors
    this.network.resistor({ ref: this.ref(name), a, b, value, tolerance, drift, fixed: false, stage })
  }

  /** The next operational amplifier, with its pins and error limits. Returns its designator. */
  amplifier(p: string, m: string, out: string, stage = this.stage): string {
    const part = this.design.parts.amplifier
    this.counter.amplifiers += 1
    const ref = `U${this.counter.amplifiers}`
    this.network.amplifier({ ref, p, m, out, vpos: 'vpos', vneg: 'vneg', part, stage })
    this.feedbackCapacitor(ref, m, out, stage)
    const input = (name: string, node: string): Pin => ({
      name: `${ref} ${name}`,
      node,
      stage,
      role: 'input',
      low: part.inputLow,
      high: part.inputHigh,
    })
    this.pins.push(input('+ input', p))
    if (m !== out) this.pins.push({ ...input('− input', m), judged: p })
    this.pins.push({
      name: `${ref} output`,
      node: out,
      stage,
      role: 'output',
      low: part.outputLow,
      high: part.outputHigh,
      swing: { ref, low: part.outputResistanceLow, high: part.outputResistanceHigh },
    })
    this.errors.push(amplifierErrors(ref, part, this.design))
    return ref
  }

  /** The capacitor that steadies an amplifier, where a person chose one; a follower has no place for it. */
  private feedbackCapacitor(amplifier: string, m: string, out: string, stage: string): void {
    const ref = feedbackRef(amplifier)
    const value = this.design.choose.values?.[ref]
    if (value === undefined || m === out) return
    const { tolerance, drift } = this.design.parts.capacitors
    this.network.capacitor({ ref, a: out, b: m, value, tolerance, drift, fixed: false, stage })
  }

  nextDesignator(): string {
    this.counter.amplifiers += 1
    return `U${this.counter.amplifiers}`
  }
}

export function amplifierErrors(ref: string, part: AmplifierPart, design: Design): AmplifierErrors {
  return {
    ref,
    vos: part.vos,
    vosDrift: part.vosDrift,
    bias: part.ib,
    ios: part.ios,
    doubling: part.ibDoubling,
    cmrr: 10 ** (-part.cmrr / 20),
    psrr: 10 ** (-part.psrr / 20),
    reference: part.vosCommonMode ?? (design.rails.positive + design.rails.negative) / 2,
  }
}
