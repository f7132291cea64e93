/** The plan: everything that the engine found for a design. Plain data that survives JSON; SI units throughout. */

/** A pair of figures for the two ends of a range. */
export interface Ends<T = number> {
  low: T
  high: T
}

/** A sentence about something wrong, or about why something cannot be; made from the code in one place. */
export interface Reason {
  code: string
  text: string
  numbers: Record<string, number>
}

export type Severity = 'over' | 'tight' | 'caution' | 'info'

/** A reason with its weight, the place it speaks of and the field of the design that sets it. */
export interface Finding extends Reason {
  severity: Severity
  /** Node, pin or part it concerns: `S1`, `U1 output`, `adc`, `vref`. */
  place: string
  /** Path into the design of the field to change, e.g. `rails.negative`. */
  path: string | null
}

export interface Component {
  ref: string
  kind: 'resistor' | 'capacitor' | 'amplifier' | 'instrumentation-amplifier'
  /** Ω or F; absent for amplifiers. */
  value?: number
  tolerance?: number
  /** Part name of an amplifier. */
  name?: string
  nodes: string[]
  fixed: boolean
  group: string | null
  /** `S1`, `S2`, `level`, `filter`, `source`. */
  stage: string
  /** What it does in a few words: "Gain, S1". */
  sets: string
  /** The value that the ideal equations ask for, before the series; absent where there is none. */
  wanted?: number
  /** True where a person fixed the value in `choose.values`. */
  chosen: boolean
}

export interface PickEntry {
  values: Record<string, number>
  /** Larger end-point error over target span, ideal amplifiers. */
  error: number
  cost: number
  /** Number of distinct resistor values. */
  distinct: number
  /** Among those no worse than max(optimum, a tenth of the tolerance error). */
  practical: boolean
  /** Output at the two ends, V, ideal amplifiers. */
  ends: Ends
}

export interface Realised {
  gain: number
  offset: number
  /** `V` … unit of the sensor's electrical output. */
  per: string
  /** y at quantity.low and quantity.high, real amplifiers, nominal; whichever is larger. */
  converter: Ends
  /** The same with ideal amplifiers. */
  ideal: Ends
  /** converter − target, V. */
  endpointError: Ends
  /** The same in LSB and in the measurand's unit. */
  endpointErrorLsb: Ends
  endpointErrorQuantity: Ends
  codes: Ends
  /** Codes between the two ends, nominal. */
  codesUsed: number
  /** y at the ends over every board, [low, high] of each end. */
  worst: { low: Ends; high: Ends }
}

export type RoomState = 'clear' | 'tight' | 'over' | 'unknown'

/** One node of the level diagram. */
export interface Level {
  /** `sensor`, `S1`, …, `adc`. */
  node: string
  /** Words for people: "Sensor output", "After S1", "Converter input". */
  title: string
  unit: 'V'
  /** Level at the low and high end of the measurand (high may be the smaller voltage in an inverting chain). */
  nominal: Ends
  /** Lowest and highest voltage that any board reaches over the required span. */
  worst: Ends
  /** Linear region, nominal. */
  region: Ends
  limitedBy: string
  /** Least worst-case room at the two limits as a fraction of the region; negative: over. */
  room: Ends
  nominalRoom: Ends
  /** Which pin sets that room: "U1 output". */
  roomAt: Ends<string>
  state: RoomState
  /** Measurand at which the lower and upper limit is met, nominal and for the worst board; null: never. */
  clipsAt: Ends<number | null>
  worstClipsAt: Ends<number | null>
  /** Gain from the node before, for the label between bays; null for the first. */
  gain: number | null
}

export interface HeadroomEntry {
  /** "U1 output", "U2 + input", "adc". */
  pin: string
  node: string
  stage: string
  /** Lowest and highest voltage over every board and the whole required span. */
  reached: Ends
  /** Limits, nominal. */
  allowed: Ends
  /** Least distance to the limit, each measured on the same board, V; negative: over. */
  margin: Ends
  nominalMargin: Ends
  clipsAt: Ends<number | null>
  worstClipsAt: Ends<number | null>
  state: RoomState
}

export interface ModelEntry {
  amplifier: string
  /** V between the inputs and A into them at full scale. */
  inputVolts: number
  inputAmps: number
  /** Loop gain at DC. */
  loopGain: number
  gainErrorPpm: number
  gainErrorLsb: number
  /** Magnitude error at the signal bandwidth, LSB; null where the design states no bandwidth. */
  atBandwidthLsb: number | null
  /** Phase, degrees, and delay, s, of the amplifier's residue at the signal bandwidth. */
  phaseAtBandwidth: number | null
  delayAtBandwidth: number | null
  /** Lowest frequency at which the magnitude error exceeds the allotment, Hz; null if at DC already. */
  holdsTo: number | null
  /** Plain verdict with its numbers. */
  verdict: Reason
  state: RoomState
}

export interface OverVoltage {
  /** "last amplifier at the positive rail", … */
  case: string
  pinVolts: Ends
  allowed: Ends
  /** A; null where nothing limits it. */
  clampCurrent: number | null
  clampLimit: number | null
  state: RoomState
}

export interface Load {
  node: string
  /** Worst current drawn from and pushed into the reference, A. */
  source: number
  sink: number
  allowed: { source: number; sink: number }
  state: RoomState
}

export interface ToleranceLine {
  /** `R1.initial`, `shiftReference.tolerance`, `U1.vos`. */
  id: string
  label: string
  source: string
  limit: number
  unit: string
  /** Change of y at the two ends for the limit, V. */
  low: number
  high: number
}

/** One equation of the chosen arrangement: with symbols and with the numbers put in. */
export interface Equation {
  /** What it gives: "Gain". */
  name: string
  symbolic: string
  numeric: string
}

export interface Candidate {
  arrangement: string
  /** Two-stage candidates carry how the gain is split. */
  stages?: { ref: string; arrangement: string; gain: number }[]
  title: string
  feasible: boolean
  reasons: Reason[]
  /** How it compares, for the list: codes given up, parts saved. */
  ranking?: { score: number; parts: number; amplifiers: number; codesLost: number; text: string }
  target?: Ends
  /** Guard band used at each end, fraction of the converter's range. */
  guard?: Ends
  components?: Component[]
  picks?: PickEntry[]
  /** Smallest error possible in the allowed set, and the tolerance error it is weighed against. */
  optimum?: { error: number; toleranceError: number }
  pick?: number
  realised?: Realised
  levels?: Level[]
  headroom?: HeadroomEntry[]
  /** How the bounds were found. */
  bound?: { vertices: number; resistors: number; proven: boolean }
  model?: ModelEntry[]
  overVoltage?: OverVoltage[]
  loads?: Load[]
  /** Worst case, first order, for the errors step: each input's share of the end points. */
  tolerance?: { lines: ToleranceLine[]; worst: Ends; rss: Ends }
  filter?: {
    kind: 'rc' | 'none'
    resistance: number
    capacitance: number
    corner: number
    /** Attenuation at the signal bandwidth, dB, and at half the sample rate; null where the design has none. */
    droopAtBandwidth: number | null
    atHalfSampleRate: number | null
    /** Time for a full-span step to settle to rules.settling LSB, s. */
    settling: number
  }
  equations?: Equation[]
  findings?: Finding[]
  netlist?: string
}

export interface Plan {
  format: 'spandrel-plan/1'
  engine: string
  designHash: string
  required: {
    gain: number
    offset: number
    per: string
    target: Ends
    guarded: Ends
    /** Sensor output at the two ends. */
    sensor: Ends
  }
  /** Volts per code. */
  lsb: number
  candidates: Candidate[]
  chosen: number | null
  /** About the design as a whole. */
  findings: Finding[]
  cautions: { code: string; text: string }[]
}

/** One fault of a document that is not a design. */
export interface Fault {
  path: string
  reason: string
  accepted: string
}
