import type { NetworkBuilder } from '#shared/network/builder.ts'
import type { AmplifierPart } from '#shared/network/types.ts'
import { temperatureSpan } from '#shared/design/references.ts'
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

/** Limits of one amplifier's error sources, for the tolerance box and the budget. SI units, at the worst temperature. */
export interface AmplifierErrors {
  ref: string
  vos: number
  /** Bias current at 25 °C as the network has it, and its limit at the hottest temperature. */
  bias: number
  ib: number
  ios: number
  /** The other amplifier of an integrated part, whose + input is its − input. */
  mate?: string
  /** 1/CMRR and 1/PSRR as ratios. */
  cmrr: number
  psrr: number
  /** Common mode at which the offset is given, V. */
  reference: number
}

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

  nextDesignator(): string {
    this.counter.amplifiers += 1
    return `U${this.counter.amplifiers}`
  }
}

/** Doubling factor of a bias current at the hottest temperature; common practice for FET inputs. */
export function biasGrowth(doubling: number, design: Design): number {
  return doubling > 0 ? Math.max(1, 2 ** ((design.temperature.high - 25) / doubling)) : 1
}

export function amplifierErrors(ref: string, part: AmplifierPart, design: Design): AmplifierErrors {
  const grow = biasGrowth(part.ibDoubling, design)
  return {
    ref,
    vos: part.vos + part.vosDrift * temperatureSpan(design),
    bias: part.ib,
    ib: part.ib * grow,
    ios: part.ios * grow,
    cmrr: 10 ** (-part.cmrr / 20),
    psrr: 10 ** (-part.psrr / 20),
    reference: part.vosCommonMode ?? (design.rails.positive + design.rails.negative) / 2,
  }
}
