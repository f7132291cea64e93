/**
 * The one description of a circuit. Every analysis, the SPICE text, the parts list and the drawing read a
 * `Network` and nothing else, so that two of them can never disagree on a value or on a connection.
 *
 * Units are SI: volts, amperes, ohms, farads, hertz, seconds; °C for temperature. Node `'0'` is ground.
 */

export const GROUND = '0'

/** Figures of an operational amplifier, as in the design file (`parts.amplifier`). Guaranteed limits at 25 °C,
 * except `gbw`, `a0`, `rout`, `en` and `in`, which are typical. */
export interface AmplifierPart {
  name: string
  /** Gain-bandwidth product, Hz. */
  gbw: number
  /** Open-loop gain at DC, V/V. */
  a0: number
  /** Phase margin of the bare amplifier at unity gain, degrees. */
  phaseMargin: number
  minimumGain: number
  /** Differential and common-mode input resistance, Ω. */
  rin: number
  rcm: number
  /** Input capacitances, F. */
  cin: { common: number; differential: number }
  /** Open-loop output resistance, Ω. */
  rout: number
  /** Offset voltage limit ±, V, its drift V/K, and the common mode at which it is given (absent: mid-rail). */
  vos: number
  vosDrift: number
  vosCommonMode?: number | undefined
  /** Bias current, positive into the pin, A; offset current limit ±, A; kelvins for doubling, 0 constant. */
  ib: number
  ios: number
  ibDoubling: number
  /** Rejection ratios, dB. */
  cmrr: number
  psrr: number
  en: number
  enCorner: number
  in: number
  inCorner: number
  /** V/s */
  slewRate: number
  /** Volts kept from each rail; negative: beyond the rail. */
  inputLow: number
  inputHigh: number
  outputLow: number
  outputHigh: number
  /** Further volts lost per ampere sunk or sourced, Ω. */
  outputResistanceLow: number
  outputResistanceHigh: number
  outputCurrent: number
  supplyCurrent: number
  minimumSupply: number
  maximumSupply: number
  absolute: { low: number; high: number; current: number }
  phaseReversal: boolean
  channels: number
}

interface ElementBase {
  /** Reference designator, unique in its network without regard to case (SPICE folds case). */
  ref: string
  /** The stage it belongs to: `source`, `S1`, `S2`, `level`, `filter`, `converter`. Groups symbols in the drawing. */
  stage: string
}

export interface Resistor extends ElementBase {
  kind: 'resistor'
  a: string
  b: string
  /** Ω, > 0 */
  value: number
  /** Limit ± as a fraction, at 25 °C; 0 for an exact element. */
  tolerance: number
  /** Temperature coefficient limit ±, 1/K. */
  drift: number
  /** True where the value is not chosen from a series: source, load, lead, or a part's internal resistance. */
  fixed: boolean
  /** Parts made on one substrate share a group. */
  group: string | null
  /** True where it is no resistor of its own: the noise figures of the part that it models count its share. */
  noiseless?: boolean
}

export interface Capacitor extends ElementBase {
  kind: 'capacitor'
  a: string
  b: string
  /** F, > 0 */
  value: number
  tolerance: number
  drift: number
  fixed: boolean
}

/** Independent voltage source: V(p) − V(n) = value. */
export interface VoltageSource extends ElementBase {
  kind: 'voltage-source'
  p: string
  n: string
  value: number
  /** Amplitude in an AC analysis, V; absent 0. */
  ac?: number
}

/** Independent current source: `value` flows from node `from` through the source into node `to`. */
export interface CurrentSource extends ElementBase {
  kind: 'current-source'
  from: string
  to: string
  value: number
  ac?: number
}

/** Ideal controlled source: V(p) − V(n) = gain·(V(cp) − V(cn)). */
export interface ControlledVoltageSource extends ElementBase {
  kind: 'controlled-voltage-source'
  p: string
  n: string
  cp: string
  cn: string
  gain: number
}

/**
 * Operational amplifier with input pins `p` (+) and `m` (−), output `out` and its supply nodes.
 * Ideal analysis: a nullor. Real analysis: finite a0, gbw, rin, rcm, cin, rout and ib of `part`, referred to ground.
 * `macro` marks one half of an integrated part whose resistances are inside it: its pins are judged against that
 * part's own limits, not against `part`'s.
 */
export interface Amplifier extends ElementBase {
  kind: 'amplifier'
  p: string
  m: string
  out: string
  vpos: string
  vneg: string
  part: AmplifierPart
  macro?: string
}

export type NetworkElement =
  Resistor | Capacitor | VoltageSource | CurrentSource | ControlledVoltageSource | Amplifier

export interface Network {
  /** Title line of the SPICE text. */
  title: string
  elements: readonly NetworkElement[]
  /** Where the firmware looks: one node against ground, or two for a differential converter. */
  output: { p: string; n: string }
  /** °C of the analysis (`.options temp`). */
  temperature: number
}
