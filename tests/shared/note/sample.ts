import type {
  Budget,
  BudgetLine,
  Candidate,
  Component,
  ErrorState,
  Level,
  Plan,
} from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import type { NoteContext } from '#shared/note/types.ts'

/**
 * A made-up plan of the right shape, for the parts of a note that must hold for any plan. Its figures are chosen to
 * be told apart on the page; what the engine finds for real designs is tested with the engine.
 */

export const sampleDocument: DesignDocument = {
  format: 'spandrel-design/1',
  name: 'Flow velocity, older logger',
  sensor: {
    kind: 'voltage',
    quantity: { name: 'Flow velocity', unit: 'm/s', low: -2.5, high: 2.5 },
    output: { low: -0.35, high: 0.35 },
    sourceResistance: 100,
    bandwidth: 10,
  },
  converter: {
    input: { low: 0, high: 2.5 },
    bits: 14,
    reference: { voltage: 2.5, tolerance: 0.001 },
  },
  rails: { positive: 5, tolerance: 0.05 },
  shiftReference: { same: 'converter' },
  temperature: { low: -10, high: 45 },
}

export const sampleContext: NoteContext = {
  workspaceName: 'Quellmoor Hydrometry',
  number: 'QH-0412',
  revision: null,
  status: 'draft',
  authorName: 'I. Sorrelby',
  date: '2026-04-17T09:30:00.000Z',
  paper: 'A4',
  language: 'en',
  symbols: 'iec',
  demo: true,
}

const level = (
  node: string,
  title: string,
  gain: number | null,
  low: number,
  high: number,
  region: [number, number],
): Level => {
  const span = region[1] - region[0]
  const clip = (limit: number, widen: number) =>
    -2.5 + (5 * (limit - low)) / (high - low) - Math.sign(limit - (low + high) / 2) * widen
  return {
    node,
    title,
    unit: 'V',
    nominal: { low, high },
    worst: { low: low - 0.01 * (high - low), high: high + 0.01 * (high - low) },
    region: { low: region[0], high: region[1] },
    limitedBy: 'U1 output',
    room: { low: (low - region[0]) / span - 0.01, high: (region[1] - high) / span - 0.01 },
    nominalRoom: { low: (low - region[0]) / span, high: (region[1] - high) / span },
    roomAt: { low: 'U1 output', high: 'U1 output' },
    state: 'clear',
    clipsAt: { low: clip(region[0], 0), high: clip(region[1], 0) },
    worstClipsAt: { low: clip(region[0], 0.05), high: clip(region[1], 0.05) },
    gain,
  }
}

/** A line of the budget of which an adjustment leaves a tenth. */
export const sampleLine = (
  id: string,
  label: string,
  source: string,
  { limit, unit, asBuilt, share }: { limit: number; unit: string; asBuilt: number; share: number },
): BudgetLine => ({
  id,
  label,
  source,
  path: null,
  limit,
  unit,
  distribution: 'rectangular',
  sensitivity: asBuilt / limit,
  standard: asBuilt / 10 / Math.sqrt(3),
  calibrates: 'span',
  group: null,
  asBuilt,
  zeroed: asBuilt / 2,
  calibrated: asBuilt / 10,
  share,
})

/** Lines with totals that add up. */
export function sampleBudget(lines: BudgetLine[]): Budget {
  const total = (state: ErrorState) => {
    const left = lines.map((line) => line[state])
    const standard = Math.hypot(...left) / Math.sqrt(3)
    return {
      worst: left.reduce((sum, value) => sum + value, 0),
      rss: Math.hypot(...left),
      expanded: 1.8 * standard,
      standard,
      k: 1.8,
      coverageBy: 'quantile' as const,
      at: 2.5,
      temperature: 45,
    }
  }
  return {
    lines,
    totals: { asBuilt: total('asBuilt'), zeroed: total('zeroed'), calibrated: total('calibrated') },
    coverage: 0.95,
    points: [-2.5, 2.5],
    perQuantity: 0.48008,
    target: null,
    improvements: [],
    zeroingHurts: false,
  }
}

export const resistor = (
  ref: string,
  value: number,
  wanted: number,
  sets: string,
  stage = 'S1',
): Component => ({
  ref,
  kind: 'resistor',
  value,
  wanted,
  sets,
  stage,
  tolerance: 0.001,
  nodes: ['a', 'b'],
  fixed: false,
  group: null,
  chosen: false,
})

export const amplifier = (ref: string): Component => ({
  ref,
  kind: 'amplifier',
  name: 'rail-to-rail amplifier, 10 MHz class',
  nodes: ['p', 'm', 'out', 'vpos', 'vneg'],
  fixed: false,
  group: null,
  stage: 'S1',
  sets: 'Gain',
  chosen: false,
})

export const sampleCandidate: Candidate = {
  arrangement: 'non-inverting-offset-up',
  title: 'Non-inverting amplifier, offset up',
  feasible: true,
  reasons: [],
  ranking: {
    score: 1,
    parts: 4,
    amplifiers: 1,
    codesLost: 12,
    text: 'Four resistors and one amplifier give all but 12 codes.',
  },
  target: { low: 0.05, high: 2.45 },
  guard: { low: 0.02, high: 0.02 },
  components: [
    resistor('R1', 24900, 24931, 'Offset, S1'),
    resistor('R2', 10200, 10211, 'Offset, S1'),
    resistor('Rf', 30100, 30074, 'Gain, S1'),
    resistor('Rg', 10500, 10487, 'Gain, S1'),
    { ...resistor('R9', 1580, 1592, 'Corner, filter', 'filter') },
    { ...resistor('C9', 1e-7, 1e-7, 'Corner, filter', 'filter'), kind: 'capacitor', tolerance: 0.05 },
    { ...resistor('RSOURCE', 100, 100, 'Source', 'source'), fixed: true },
    amplifier('U1'),
  ],
  picks: [
    {
      values: { R1: 24900, R2: 10200, Rf: 30100, Rg: 10500 },
      error: 4.21e-4,
      cost: 1,
      distinct: 4,
      practical: true,
      ends: { low: 0.0493, high: 2.4507 },
    },
    {
      values: { R1: 49900, R2: 20500, Rf: 15000, Rg: 5230 },
      error: 3.9e-4,
      cost: 2,
      distinct: 4,
      practical: true,
      ends: { low: 0.0494, high: 2.4508 },
    },
  ],
  pick: 0,
  optimum: { error: 3.17e-4, toleranceError: 5.23e-3 },
  realised: {
    gain: 3.4291,
    offset: 1.2503,
    per: 'V',
    converter: { low: 0.0501, high: 2.4505 },
    ideal: { low: 0.0501, high: 2.4505 },
    endpointError: { low: 0.0001, high: 0.0005 },
    endpointErrorLsb: { low: 0.66, high: 3.28 },
    endpointErrorQuantity: { low: 0.000208, high: 0.00104 },
    codes: { low: 328, high: 16060 },
    codesUsed: 15732,
    worst: { low: { low: 0.0413, high: 0.0589 }, high: { low: 2.4381, high: 2.4629 } },
  },
  levels: [
    level('sensor', 'Sensor output', null, -0.35, 0.35, [-0.3646, 0.3633]),
    level('S1', 'After S1', 3.4291, 0.0501, 2.4505, [0.02, 4.73]),
    level('adc', 'Converter input', 1, 0.0501, 2.4505, [0, 2.5]),
  ],
  headroom: [
    {
      pin: 'U1 + input',
      node: 'a',
      stage: 'S1',
      reached: { low: 0.0116, high: 0.6721 },
      allowed: { low: 0, high: 5 },
      margin: { low: 0.0116, high: 4.0779 },
      nominalMargin: { low: 0.0131, high: 4.329 },
      clipsAt: { low: -2.587, high: null },
      worstClipsAt: { low: -2.561, high: null },
      state: 'tight',
    },
    {
      pin: 'U1 output',
      node: 'S1',
      stage: 'S1',
      reached: { low: 0.0413, high: 2.4629 },
      allowed: { low: 0.02, high: 4.98 },
      margin: { low: 0.0213, high: 2.2671 },
      nominalMargin: { low: 0.0301, high: 2.5295 },
      clipsAt: { low: -2.563, high: 7.769 },
      worstClipsAt: { low: -2.544, high: 7.223 },
      state: 'clear',
    },
  ],
  bound: { vertices: 64, resistors: 6, proven: true },
  model: [
    {
      amplifier: 'U1',
      inputVolts: 2.451e-6,
      inputAmps: 1.002e-11,
      loopGain: 258800,
      gainErrorPpm: 3.864,
      gainErrorLsb: 0.0608,
      atBandwidthLsb: 0.0611,
      phaseAtBandwidth: -0.002,
      delayAtBandwidth: 6.2e-7,
      holdsTo: 23400,
      verdict: {
        code: 'model-holds',
        text: 'U1 keeps to the ideal model within 0.061 LSB; 0.5 LSB is allowed, and that is reached at 23.4 kHz.',
        numbers: {},
      },
      state: 'clear',
    },
  ],
  overVoltage: [
    {
      case: 'last amplifier at the positive rail',
      pinVolts: { low: 4.75, high: 5.25 },
      allowed: { low: -0.3, high: 2.8 },
      clampCurrent: 1.55e-3,
      clampLimit: 5e-3,
      state: 'tight',
    },
  ],
  loads: [{ node: 'vref', source: 8.1e-5, sink: 0, allowed: { source: 0.01, sink: 0 }, state: 'clear' }],
  budget: sampleBudget([
    sampleLine('Rf.initial', 'Rf tolerance', 'Rf', { limit: 0.001, unit: '', asBuilt: 0.0031, share: 0.9 }),
    sampleLine('U1.vos', 'U1 offset voltage', 'U1', { limit: 2e-4, unit: 'V', asBuilt: 0.00077, share: 0.1 }),
  ]),
  filter: {
    kind: 'rc',
    response: 'butterworth',
    normalisation: 'the corner is where the response is 3 dB down',
    order: 1,
    wantedCorner: 1000,
    corner: 1007,
    sections: [],
    resistance: 1580,
    capacitance: 1e-7,
    droopAtBandwidth: 0.0004,
    alias: null,
    atHalfSampleRate: null,
    floor: null,
    band: { corner: { low: 950, high: 1070 }, droop: null, reached: null },
    digital: null,
    mains: null,
  },
  equations: [
    {
      name: 'Gain',
      symbolic: 'G = R2/(R1 + R2)·(1 + Rf/Rg)',
      numeric: 'G = 24.9 kΩ/(10.2 kΩ + 24.9 kΩ)·(1 + 30.1 kΩ/10.5 kΩ) = 3.4291',
    },
    {
      name: 'Offset',
      symbolic: 'b = Vref·R1/(R1 + R2)·(1 + Rf/Rg)',
      numeric: 'b = 2.5 V·10.2 kΩ/(10.2 kΩ + 24.9 kΩ)·(1 + 30.1 kΩ/10.5 kΩ) = 1.2503 V',
    },
  ],
  findings: [
    {
      code: 'tight-input',
      text: 'Only 11.6 mV is left below U1 + input; the rule asks for 3 % of the region.',
      numbers: {},
      severity: 'tight',
      place: 'U1 + input',
      path: 'parts.amplifier',
    },
  ],
  netlist: [
    '* Flow velocity, older logger',
    'VSENSE sense 0 -0.35 AC 1',
    'RSOURCE sense in 100',
    'R1 in a 24900',
    'R2 vref a 10200',
    'Rf S1 b 30100',
    'Rg b 0 10500',
    '.options temp=25',
    '.op',
    '.end',
  ].join('\n'),
}

export const samplePlan: Plan = {
  format: 'spandrel-plan/1',
  engine: '0.1.0',
  designHash: '5f0c91ae77d20b4e1c3f6a905e8db274c60f19a3528be7d4406fc8a1b93e75d2',
  required: {
    gain: 3.42857,
    offset: 1.25,
    per: 'V',
    target: { low: 0.05, high: 2.45 },
    guarded: { low: 0.05, high: 2.45 },
    sensor: { low: -0.35, high: 0.35 },
  },
  lsb: 2.5 / 16384,
  candidates: [
    sampleCandidate,
    {
      arrangement: 'direct',
      title: 'Direct connection',
      feasible: false,
      reasons: [{ code: 'gain', text: 'a gain of 3.429 is needed, a wire has 1', numbers: {} }],
    },
    {
      arrangement: 'inverting',
      title: 'Inverting amplifier',
      feasible: false,
      reasons: [
        { code: 'swing-low', text: 'needs a negative rail: the output would go to −0.31 V', numbers: {} },
      ],
    },
  ],
  chosen: 0,
  findings: [],
  cautions: [],
}

export const infeasiblePlan: Plan = {
  ...samplePlan,
  candidates: samplePlan.candidates.slice(1),
  chosen: null,
}

/** Many parts, candidates and long names, to see that nothing breaks. */
export function buildStressPlan(): Plan {
  const nodes = ['sensor', 'S1', 'S2', 'filter', 'adc']
  const reasons = Array.from({ length: 3 }, (_, i) => ({
    code: `long-${i}`,
    text: `needs a negative rail of at least −1.25 V because the output of the second stage would otherwise go to −0.31 V at a flow of ${i} m/s`,
    numbers: {},
  }))
  return {
    ...samplePlan,
    candidates: [
      {
        ...sampleCandidate,
        title: 'Three-amplifier instrumentation amplifier, then weighted difference with a buffered level',
        stages: [
          { ref: 'S1', arrangement: 'three-amplifier', gain: 100.8 },
          { ref: 'S2', arrangement: 'weighted-difference', gain: 3.383 },
        ],
        components: [
          ...Array.from({ length: 18 }, (_, i) =>
            resistor(
              `R${i + 1}B`,
              1000 * (i + 11),
              1003 * (i + 11),
              `Gain and level at the reference leg, S${(i % 2) + 1}`,
            ),
          ),
          { ...resistor('C9', 4.7e-9, 4.55e-9, 'Corner, filter', 'filter'), kind: 'capacitor' },
          ...['U1', 'U2', 'U3', 'U4', 'U9'].map(amplifier),
        ],
        levels: nodes.map((node, i) =>
          level(
            node,
            i === 0 ? 'Sensor output' : i === 4 ? 'Converter input' : `After ${node}`,
            i === 0 ? null : 3.383,
            -0.35 + i,
            0.35 + i,
            [-1 + i, 1 + i],
          ),
        ),
        headroom: Array.from({ length: 28 }, (_, i) => ({
          ...sampleCandidate.headroom![i % 2]!,
          pin: `U${i} internal node behind the + input`,
        })),
        model: Array.from({ length: 5 }, (_, i) => ({
          ...sampleCandidate.model![0]!,
          amplifier: `U${i + 1}`,
        })),
        budget: sampleBudget(
          Array.from({ length: 40 }, (_, i) =>
            sampleLine(
              `R${i}.initial`,
              `R${i}, initial tolerance and change over the whole range of temperature`,
              `R${i}`,
              { limit: 1e-3, unit: '', asBuilt: 2e-4 * (i + 1), share: (i + 1) / 820 },
            ),
          ),
        ),
        netlist: Array.from(
          { length: 140 },
          (_, i) =>
            `R${i} node_number_${i} node_number_${i + 1} ${1000 + i} tc1=2.5e-05 tc2=0 m=1 noisy=1 temp=25 dtemp=0 ac=${1000 + i} scale=1 and more`,
        ).join('\n'),
      },
      ...Array.from({ length: 22 }, (_, i) => ({
        arrangement: `kind-${i}`,
        title: `Arrangement number ${i} with a rather long title`,
        feasible: i % 3 === 0,
        reasons,
      })),
    ],
    cautions: [
      {
        code: 'flood',
        text: 'Flood supervision: isolation, surge protection and functional safety follow the local codes and a licensed or certified practitioner.',
      },
    ],
  }
}
