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

/** The three states in which the error is judged (see `calibration.points`). */
export type ErrorState = 'asBuilt' | 'zeroed' | 'calibrated'

export type Distribution = 'rectangular' | 'normal'

/** One uncertain input: its limit, what it does to y, and what is left of it in each state. */
export interface BudgetLine {
  /** `R1.initial`, `shiftReference.tolerance`, `U1.vos`, `sensor.zero`, `converter.quantisation`, `noise`. */
  id: string
  label: string
  /** Part or input it belongs to, as in the parts list: `R1`, `U1`, `shiftReference`, `sensor`, `converter`. */
  source: string
  /** Field of the design that sets its limit, e.g. `parts.resistors.tolerance`. */
  path: string | null
  /** Limit ± in `unit`, per kelvin or per year already multiplied out for as built. */
  limit: number
  unit: string
  distribution: Distribution
  /** dy per `unit` at the point where the as-built total is largest, V. */
  sensitivity: number
  /** Standard uncertainty of y there in the state of the target, V. */
  standard: number
  /** What adjustment takes it away at the calibration temperature. */
  calibrates: 'zero' | 'span' | 'none'
  /** Inputs that move together, e.g. `resistors`; null for one of its own. */
  group: string | null
  /** Limit ± of y left in each state, V, at that state's own worst point. */
  asBuilt: number
  zeroed: number
  calibrated: number
  /** Share of the variance in the state of the target, 0 to 1. */
  share: number
}

export interface BudgetTotal {
  /** Sum of limits, root-sum-of-squares of limits, expanded uncertainty; V of y, ±. */
  worst: number
  rss: number
  expanded: number
  /** Combined standard uncertainty, V. */
  standard: number
  /** expanded / standard. */
  k: number
  /** How the coverage was found: k of the normal distribution, or the quantile of the combined one. */
  coverageBy: 'normal' | 'quantile'
  /** Measurand and temperature (°C) at which the total is largest. */
  at: number
  temperature: number
}

/** What one of the largest lines would have to be. */
export interface Improvement {
  line: string
  /** `target`: limit with which the target is met; `half`: with which the total halves. */
  aim: 'target' | 'half'
  /** Limit needed, in the line's unit; null where even 0 would not do. */
  needed: number | null
  /** Total (expanded, V of y) with that limit. */
  after: number
  /** A part or class of the library that reaches it, and the total with it; null where none does. */
  part: { name: string; limit: number; after: number } | null
  text: string
}

export interface Budget {
  lines: BudgetLine[]
  totals: Record<ErrorState, BudgetTotal>
  coverage: number
  /** Calibration points used, measurand. */
  points: number[]
  /** Volts of y per unit of the measurand (positive), for the other ways of saying a figure. */
  perQuantity: number
  /** The target in V of y and whether the expanded uncertainty of its state meets it; null without a target. */
  target: { state: ErrorState; limit: number; met: boolean } | null
  improvements: Improvement[]
  /** True where zeroing alone makes the total larger than as built, by more than a hundredth. */
  zeroingHurts: boolean
}

export interface NoiseLine {
  /** `R1`, `U1.en`, `U1.in+`, `reference`, `converter`, `quantisation`. */
  id: string
  label: string
  source: string
  /** V rms of y. */
  rms: number
  share: number
}

export interface NoiseSummary {
  /** Band of integration, Hz; `to` is where nothing more is added. */
  from: number
  to: number
  /** K */
  temperature: number
  /** All lines together, V rms of y. */
  rms: number
  /** Circuit alone, without converter and quantisation. */
  circuit: number
  lines: NoiseLine[]
  /** Full-span sine against noise, dB. */
  snr: number
  effectiveBits: number
  noiseFreeBits: number
  dominant: string
}

/** A change that cures an amplifier, with the values of `choose` that take it. */
export interface Cure {
  kind: 'series-resistor' | 'feedback-capacitor'
  ref: string
  value: number
  /** Phase margin with it, worst over tolerance, degrees. */
  phaseMargin: number
  /** For `choose.values`. */
  values: Record<string, number>
  text: string
}

export interface StabilityEntry {
  amplifier: string
  /** Hz; null where the loop gain never falls to one. */
  crossover: number | null
  /** Degrees; null where there is no crossover. */
  phaseMargin: number | null
  /** Smallest over the tolerance of the capacitors. */
  worst: number | null
  state: RoomState
  cures: Cure[]
}

export interface Dynamics {
  /** −3 dB bandwidth from the sensor to the converter, Hz; null where it lies beyond the search. */
  bandwidth: number | null
  /** Closed-loop bandwidth of each amplifier, Hz (crossover of its loop). */
  amplifiers: { amplifier: string; bandwidth: number }[]
  /** Loss of amplitude at the signal bandwidth, fraction; null without one. */
  droopAtBandwidth: number | null
  /** Time for a full-span step to stay within rules.settling LSB, s, from the network's own response; null where it
   * never does. */
  settling: number | null
  /** Largest frequency at which the full span is not slewed, Hz; null without amplifiers. */
  fullPower: number | null
  /** False where the signal bandwidth exceeds it. */
  followsSignal: boolean
  /** Past the final value, as a fraction of the step; null where it never settles. */
  overshoot: number | null
}

export interface Drive {
  /** Criterion, LSB (rules.settling). */
  criterion: number
  /** Step at the pin when sampling begins, V. */
  kick: number
  /** Time needed to settle (null: never) and time there is, s. */
  needed: number | null
  available: number | null
  /** Error left at the end of the acquisition, LSB. */
  settled: number | null
  /** The same judged at 1, ½ and ¼ LSB. */
  criteria: { criterion: number; needed: number | null; met: boolean | null }[]
  /** Largest resistance of a source without a buffer that still settles, Ω. */
  largestSource: number | null
  /** Previous channel of a multiplexed converter at the opposite end. */
  multiplexed: { channels: number; step: number; needed: number | null; met: boolean | null } | null
  /** Average current drawn by sampling, A, and the droop across the series resistance, V. */
  average: { current: number; droop: number } | null
  state: RoomState
  text: string
}

export type FilterKind = 'none' | 'rc' | 'sallen-key' | 'multiple-feedback'
export type FilterResponse = 'butterworth' | 'bessel' | 'chebyshev'

/** One second-order section (or the first-order one) as wanted and as its standard parts give it. */
export interface FilterSection {
  ref: string
  wanted: { f0: number; q: number | null }
  /** From the values alone, ideal amplifier. */
  values: { f0: number; q: number | null }
  /** From the network with the real amplifier; null where it has no resonance to read. */
  real: { f0: number; q: number | null } | null
  parts: Record<string, number>
}

export interface FilterPlan {
  kind: FilterKind
  response: FilterResponse
  order: number
  /** What the corner means, as a sentence; empty without a filter. */
  normalisation: string
  /** −3 dB corner wanted and realised through the network, Hz; 0 for none. */
  wantedCorner: number
  corner: number
  sections: FilterSection[]
  /** Series resistor and capacitor at the converter's pin, Ω and F; 0 where there is none. */
  resistance: number
  capacitance: number
  /** Attenuation at the signal bandwidth, dB; null where the design states none. */
  droopAtBandwidth: number | null
  /** Alias: lowest frequency that folds into the band, attenuation wanted and reached there, dB. */
  alias: {
    frequency: number
    wanted: number
    reached: number
    state: RoomState
    /** Order that would reach it with each response at this rate; null where six poles do not. */
    orders: Record<FilterResponse, number | null>
    /** Sample rate at which the present filter would reach it, Hz. */
    rateFor: number | null
  } | null
  atHalfSampleRate: number | null
  /** Least attenuation left where real amplifiers let the stop band come back, dB, and where, Hz; null: it never does. */
  floor: { attenuation: number; frequency: number } | null
  /** Corner and droop over the tolerance of the parts. */
  band: { corner: Ends; droop: Ends | null; reached: Ends | null }
  /** Digital filter of an oversampling converter. */
  digital: {
    kind: string
    modulatorRate: number
    outputRate: number
    droop: number | null
    mains: { frequency: number; rejection: number }[]
  } | null
  /** Mains common mode against imbalance of source and leads; null for a single-ended chain. */
  mains: { frequency: number; imbalance: number; rejection: number; error: number }[] | null
}

/** One figure of ours against ngspice. */
export interface CheckLine {
  /** "Operating point, low end", "Gain at 1 kHz", "Output noise". */
  what: string
  unit: string
  ours: number
  spice: number
  difference: number
  /** Largest difference accepted, same unit. */
  allowed: number
  ok: boolean
}

export interface IndependentCheck {
  simulator: string
  lines: CheckLine[]
  ok: boolean
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
  stability?: StabilityEntry[]
  budget?: Budget
  noise?: NoiseSummary
  dynamics?: Dynamics
  drive?: Drive
  filter?: FilterPlan
  /** Only where it was asked for: it takes a simulator. */
  check?: IndependentCheck
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
