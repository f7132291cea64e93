import { describe, it } from 'vitest'
import { solveDc, type DcSolution } from '#shared/analysis/dc.ts'
import { assess } from '#shared/budget/assess.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import cases from '#tests/fixtures/analog-cases.json' with { type: 'json' }
import { buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose, type Closeness } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/*
 * Published circuits, their values fixed in a design, put together by the arrangements' own code. Each figure is held
 * against the book's (to its rounding) and against its recomputation (to a millionth).
 */

type Figures = Record<string, unknown>

interface Published {
  source: string
  given: Figures
  expect: Figures
  recomputed: Figures
  tolerance: Record<string, Closeness & { abs?: number; rel?: number }>
}

// The type inferred from the file is one shape for each case; all are read by key.
const all = cases as unknown as (Published & { id: string })[]

function published(id: string): Published {
  const found = all.find((entry) => entry.id === id)
  if (!found) throw new Error(`there is no published case ${id}`)
  return found
}

const one = (record: Figures, key: string): number => many(record, key)[0] ?? NaN
const many = (record: Figures, key: string): number[] => [record[key]].flat(2).map(Number)

/** Holds figures against what was printed and what was recomputed under one key. */
function expectPublished(entry: Published, key: string, ...actual: number[]): void {
  const { abs = 0, rel = 0 } = entry.tolerance[key] ?? entry.tolerance['*'] ?? {}
  const printed = entry.expect[key] === undefined ? null : many(entry.expect, key)
  actual.forEach((value, at) => {
    expectClose(value, many(entry.recomputed, key)[at] ?? NaN, { relative: 1e-6, absolute: 1e-12 })
    if (printed) expectClose(value, printed[at] ?? NaN, { absolute: abs, relative: rel })
  })
}

interface Circuit {
  arrangement: string
  /** Signal and output at the two ends of the measurand. */
  signal: [number, number]
  output: [number, number]
  reference?: number
  values: Record<string, number>
  commonMode?: { low: number; high: number }
  tolerance?: number
  k?: number
}

/** A textbook's circuit: every value fixed, nothing else in the way, and an amplifier without errors of its own. */
function documentOf(circuit: Circuit): DesignDocument {
  const { signal, output, commonMode, reference = 2.5, tolerance = 0 } = circuit
  const low = Math.min(...output)
  const span = Math.abs(output[1] - output[0])
  return buildDesign({
    sensor: buildSensor(signal[0], signal[1], {
      sourceResistance: 0,
      ...(commonMode ? { wiring: 'differential', commonMode } : {}),
    }),
    converter: {
      input: { low: low - span, high: low + 2 * span },
      guard: { low: 1 / 3, high: 1 / 3 },
      bits: 16,
      reference: { voltage: reference, source: 1 },
    },
    rails: { positive: 18, negative: -18 },
    parts: {
      resistors: { tolerance, drift: 0 },
      amplifier: { vos: 0, vosDrift: 0, ib: 0, ios: 0, cmrr: 200, a0: 1e12, rin: 1e15, rcm: 1e15 },
      ...(circuit.k ? { instrumentation: { k: circuit.k } } : {}),
    },
    choose: { arrangement: circuit.arrangement, values: circuit.values, filter: { kind: 'none' } },
  })
}

function build(circuit: Circuit) {
  const design = parseDesign(documentOf(circuit))
  const trial = buildTrial(design, circuit.arrangement)
  const bounds = assess(design, trial.spec, 'with-clips')
  const solve = (chain: Chain, set: Record<string, number> = {}): DcSolution =>
    solveDc(chain.network, { model: 'ideal', set })
  const { low, high } = bounds.chains
  return {
    trial,
    bounds,
    low: solve(low),
    high: solve(high),
    solve: (set: Record<string, number>) => solve(high, set),
  }
}

/** Gain and offset of the straight line through the two ends. */
function lineOf(circuit: Circuit): { gain: number; offset: number; ends: [number, number] } {
  const { low, high } = build(circuit)
  const [s0, s1] = circuit.signal
  const gain = (high.output - low.output) / (s1 - s0)
  return { gain, offset: low.output - gain * s0, ends: [low.output, high.output] }
}

const sourced = (id: string): [string, string] => [id, published(id).source]

describe('gain and offset of single-supply stages', () => {
  it.each([sourced('offset-up-from-spans')])(
    '%s: the design equations give line and resistors (%s)',
    (id) => {
      const entry = published(id)
      const { given, recomputed } = entry
      const circuit: Circuit = {
        arrangement: 'non-inverting-up',
        signal: [one(given, 'vin_lo_V'), one(given, 'vin_hi_V')],
        output: [one(given, 'vout_lo_V'), one(given, 'vout_hi_V')],
        reference: one(given, 'vref_V'),
        values: {
          R1: one(given, 'R1_ohm'),
          Rg: one(given, 'RG_ohm'),
          R2: one(recomputed, 'R2_ideal_ohm'),
          Rf: one(recomputed, 'RF_ideal_ohm'),
        },
      }
      const { gain, offset } = lineOf(circuit)
      expectPublished(entry, 'm', gain)
      expectPublished(entry, 'b_V', offset)
      const wanted = build(circuit).trial.stages[0]!.sized.wanted()
      expectPublished(entry, 'R2_ideal_ohm', wanted.R2 ?? NaN)
      expectPublished(entry, 'RF_ideal_ohm', wanted.Rf ?? NaN)
    },
  )

  it.each([sourced('offset-up-standard-values')])('%s: outputs with the values of the series (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const { gain, offset, ends } = lineOf({
      arrangement: 'non-inverting-up',
      signal: many(given, 'vin_V') as [number, number],
      output: [1, 4.5],
      reference: one(given, 'vref_V'),
      values: {
        R1: one(given, 'R1_ohm'),
        R2: one(given, 'R2_ohm'),
        Rf: one(given, 'RF_ohm'),
        Rg: one(given, 'RG_ohm'),
      },
    })
    expectPublished(entry, 'm', gain)
    expectPublished(entry, 'b_V', offset)
    expectPublished(entry, 'vout_V', ...ends)
  })

  it.each([sourced('offset-down-standard-values')])('%s: the divider loads the gain resistor (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const { gain, offset, ends } = lineOf({
      arrangement: 'non-inverting-down',
      signal: many(given, 'vin_V') as [number, number],
      output: [1.5, 4.5],
      reference: one(given, 'vref_V'),
      values: {
        R1: one(given, 'R1_ohm'),
        R2: one(given, 'R2_ohm'),
        Rf: one(given, 'RF_ohm'),
        Rg: one(given, 'RG_ohm'),
      },
    })
    expectPublished(entry, 'm', gain)
    expectPublished(entry, 'b_V', offset)
    expectPublished(entry, 'vout_V', ...ends)
  })

  it.each([sourced('inverting-offset-up-from-spans')])('%s: line and resistors (%s)', (id) => {
    const entry = published(id)
    const { given, recomputed } = entry
    const circuit: Circuit = {
      arrangement: 'inverting-up',
      signal: [one(given, 'vin_lo_V'), one(given, 'vin_hi_V')],
      output: [one(given, 'vout_lo_V'), one(given, 'vout_hi_V')],
      reference: one(given, 'vref_V'),
      // The source counts its divider from ground: its R2 is the upper leg.
      values: {
        Rg: one(given, 'RG_ohm'),
        Rf: one(recomputed, 'RF_ideal_ohm'),
        R1: one(recomputed, 'R2_ideal_ohm'),
        R2: one(given, 'R1_ohm'),
      },
    }
    const { gain, offset } = lineOf(circuit)
    expectPublished(entry, 'm', gain)
    expectPublished(entry, 'b_V', offset)
    const wanted = build(circuit).trial.stages[0]!.sized.wanted()
    expectPublished(entry, 'RF_ideal_ohm', wanted.Rf ?? NaN)
    expectPublished(entry, 'R2_ideal_ohm', wanted.R1 ?? NaN)
  })

  it.each([sourced('inverting-offset-down')])('%s: line, resistors and outputs (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const circuit: Circuit = {
      arrangement: 'inverting-down',
      signal: [one(given, 'vin_lo_V'), one(given, 'vin_hi_V')],
      output: [one(given, 'vout_lo_V'), one(given, 'vout_hi_V')],
      reference: one(given, 'vref_V'),
      values: {
        Rg: one(given, 'RG1_ohm'),
        Rf: one(entry.expect, 'RF_ohm'),
        Rs: one(entry.expect, 'RG2_ohm'),
      },
    }
    const { gain, offset, ends } = lineOf(circuit)
    expectPublished(entry, 'm', gain)
    expectPublished(entry, 'b_V', offset)
    expectPublished(entry, 'vout_V', ...ends)
    const wanted = build(circuit).trial.stages[0]!.sized.wanted()
    expectPublished(entry, 'RF_ohm', wanted.Rf ?? NaN)
    expectPublished(entry, 'RG2_ohm', wanted.Rs ?? NaN)
  })

  it.each([sourced('thermistor-divider-and-offset-stage')])('%s: gain of the offset stage (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const { ends } = lineOf({
      arrangement: 'non-inverting-down',
      signal: many(given, 'vin_used_V') as [number, number],
      output: [one(given, 'vout_min_V'), one(given, 'vout_max_V')],
      reference: one(given, 'vdd_V'),
      // A plain divider at the − input: the resistor after it is a wire.
      values: {
        R1: one(entry.recomputed, 'R4_ideal_ohm'),
        R2: one(entry.recomputed, 'R2_ideal_ohm'),
        Rf: one(given, 'R3_ohm'),
        Rg: 1e-3,
      },
    })
    const [v0 = NaN, v1 = NaN] = many(given, 'vin_used_V')
    // The wire of a thousandth of an ohm counts four millionths.
    const gain = (ends[1] - ends[0]) / (v1 - v0)
    expectClose(gain, one(entry.recomputed, 'gain_ideal'), { relative: 5e-6 })
    expectClose(gain, one(entry.expect, 'gain_ideal'), { absolute: entry.tolerance.gain_ideal?.abs ?? 0 })
    expectClose(ends[0], one(given, 'vout_min_V'), { absolute: 1e-4 })
    expectClose(ends[1], one(given, 'vout_max_V'), { absolute: 1e-4 })
  })

  it.each([sourced('bipolar-span-from-unipolar')])('%s: the ratios give the bipolar span (%s)', (id) => {
    const { given, expect: printed } = published(id)
    const rf = 20000
    const { ends } = lineOf({
      arrangement: 'non-inverting-down',
      signal: [one(given, 'vdac_lo_V'), one(given, 'vdac_hi_V')],
      output: [one(given, 'vout_lo_V'), one(given, 'vout_hi_V')],
      reference: one(given, 'vref_V'),
      values: {
        R1: rf / one(printed, 'RFB_over_RG2'),
        R2: rf / one(printed, 'RFB_over_RG1'),
        Rf: rf,
        Rg: 1e-3,
      },
    })
    expectClose(ends[0], one(given, 'vout_lo_V'), { absolute: 1e-5 })
    expectClose(ends[1], one(given, 'vout_hi_V'), { absolute: 1e-5 })
  })
})

describe('difference and instrumentation amplifiers', () => {
  it.each([sourced('difference-mismatched-outputs')])('%s: common mode passes unequal pairs (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const values = { R1: 'R1_ohm', R2: 'R2_ohm', R3: 'R3_ohm', R4: 'R4_ohm' }
    const found = build({
      arrangement: 'difference-grounded',
      signal: [0, 0.2],
      output: [0, 2],
      commonMode: { low: 0, high: 10 },
      values: Object.fromEntries(Object.entries(values).map(([ref, key]) => [ref, one(given, key)])),
    })
    const at = [0, 5, 10].map((VCM) => found.solve({ VCM }).output)
    expectPublished(entry, 'vout_V', ...at)
    // The bound over the common mode is the span of the same three.
    const { worst } = found.bounds.y
    expectClose(worst.high.low, one(entry.expect, 'vout_V'), { absolute: 6e-4 })
    expectClose(worst.high.high, many(entry.expect, 'vout_V')[2] ?? NaN, { absolute: 6e-4 })
  })

  it.each([sourced('difference-cmrr-1-percent')])(
    '%s: the bound at no signal is the leak of common mode (%s)',
    (id) => {
      const entry = published(id)
      const { given } = entry
      const vcm = one(given, 'vcm_V')
      const { worst } = build({
        arrangement: 'difference-grounded',
        signal: [0, 0.2],
        output: [0, 2],
        commonMode: { low: 0, high: vcm },
        values: { R1: 1e4, R3: 1e4, R2: 1e5, R4: 1e5 },
        tolerance: one(given, 'tolerance'),
      }).bounds.y
      // The book's figure is to first order in the tolerance, 1 % of it two percent too large.
      expectClose(worst.low.high, one(entry.expect, 'vout_cm_V'), { relative: 0.02 })
      // All sixteen corners of the four resistors, by hand.
      const leaks = corners(4).map(([a = 0, b = 0, c = 0, d = 0]) => {
        const t = one(given, 'tolerance')
        const [r1, r2, r3, r4] = [1e4 * (1 + a * t), 1e5 * (1 + b * t), 1e4 * (1 + c * t), 1e5 * (1 + d * t)]
        return vcm * ((r4 / (r3 + r4)) * (1 + r2 / r1) - r2 / r1)
      })
      expectClose(worst.low.high, Math.max(...leaks), { absolute: 1e-7 })
      expectClose(worst.low.low, Math.min(...leaks), { absolute: 1e-7 })
    },
  )

  it.each([sourced('difference-cmrr-table')])('%s: rejection at the worst corner by tolerance (%s)', (id) => {
    const entry = published(id)
    many(entry.given, 'tolerance').forEach((tolerance, at) => {
      const { worst } = build({
        arrangement: 'difference-grounded',
        signal: [0, 1],
        output: [0, 1],
        commonMode: { low: 0, high: 1 },
        values: { R1: 1e4, R3: 1e4, R2: 1e4, R4: 1e4 },
        tolerance,
      }).bounds.y
      // The corner that leaks most outwards also has (1 + t)/(1 − t) for the gain of one leg.
      const leak = Math.max(-worst.low.low, worst.low.high)
      const gain = 1 + leak / 2
      expectClose(20 * Math.log10(gain / leak), many(entry.expect, 'CMRR_dB')[at] ?? NaN, { absolute: 0.5 })
    })
  })

  it.each([sourced('difference-cmrr-one-resistor')])('%s: one resistor that is off (%s)', (id) => {
    const entry = published(id)
    const off = one(entry.given, 'one_resistor_mismatch')
    const found = build({
      arrangement: 'difference-grounded',
      signal: [0, 1],
      output: [0, 1],
      commonMode: { low: 0, high: 1 },
      values: { R1: 1e4, R3: 1e4, R2: 1e4 * (1 + off), R4: 1e4 },
    })
    const leak = Math.abs(found.solve({ VSENSE: 0, VCM: 1 }).output)
    const gain = Math.abs(found.solve({ VSENSE: 1, VCM: 0 }).output)
    expectPublished(entry, 'CMRR_dB', 20 * Math.log10(gain / leak))
  })

  it.each([sourced('two-amplifier-gain-and-inner-node')])(
    '%s: gain, and where the first output goes (%s)',
    (id) => {
      const entry = published(id)
      const { given } = entry
      const [small, large] = [one(given, 'R_small_ohm'), one(given, 'R_large_ohm')]
      const found = build({
        arrangement: 'two-amplifier-grounded',
        signal: [-1, 1],
        output: [-10, 10],
        commonMode: { low: -10, high: 10 },
        values: { R1: small, R2: large, R3: small, R4: large, Rg: one(given, 'Rg_ohm') },
      })
      expectPublished(entry, 'gain', (found.high.output - found.low.output) / 2)
      const first = found.solve({ VSENSE: -1, VCM: 10 }).voltage('o1')
      expectPublished(entry, 'outA1_V_vcm10_vdm1_G10', first)
      const pin = found.bounds.pins.find((p) => p.name === 'U1 output')
      expectClose(pin?.reached.low?.high ?? NaN, first, { absolute: 1e-4 })
    },
  )

  it.each([sourced('three-amplifier-inner-nodes')])('%s: inner nodes, gain and common mode (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const [r, ri, rf] = [one(given, 'R_ohm'), one(given, 'Ri_ohm'), one(given, 'Rf_ohm')]
    const signal = one(given, 'vin_plus_V') - one(given, 'vin_minus_V')
    const found = build({
      arrangement: 'three-amplifier-grounded',
      signal: [-signal, signal],
      output: [-6.06, 6.06],
      commonMode: { low: 0, high: 0 },
      values: { R1: r, R2: r, Rg: one(given, 'Rg_ohm'), R3: ri, R4: ri, R5: rf, R6: rf },
    })
    expectPublished(entry, 'va_V', found.high.voltage('o1'))
    expectPublished(entry, 'vb_V', found.high.voltage('o2'))
    expectPublished(entry, 'vout_V', found.high.output)
    expectPublished(entry, 'gain', found.high.output / signal)
    const common = found.solve({ VSENSE: 0, VCM: one(given, 'vcm_test_V') })
    expectPublished(entry, 'va_for_cm_V', common.voltage('o1'))
  })

  it.each([sourced('in-amp-gain-resistor-1')])(
    '%s: gain of a resistor, and resistor for a gain (%s)',
    (id) => {
      const entry = published(id)
      const circuit = {
        arrangement: 'integrated-instrumentation-grounded',
        commonMode: { low: 0, high: 0 },
        k: one(entry.given, 'R_internal_ohm'),
      }
      const { gain } = lineOf({
        ...circuit,
        signal: [-0.01, 0.01],
        output: [-1, 1],
        values: { Rg: one(entry.given, 'Rg_ohm') },
      })
      expectPublished(entry, 'gain', gain)
      const target = one(entry.given, 'G_target')
      const wanted = build({
        ...circuit,
        signal: [-0.1, 0.1],
        output: [-0.1 * target, 0.1 * target],
        values: {},
      }).trial.stages[0]!.sized.wanted()
      expectPublished(entry, 'Rg_for_G10_ohm', wanted.Rg ?? NaN)
    },
  )

  it.each([sourced('in-amp-variable-gain')])('%s: both ends of the adjustment (%s)', (id) => {
    const entry = published(id)
    const { given } = entry
    const [r3, r4, pot] = [one(given, 'R3_ohm'), one(given, 'R4_ohm'), one(given, 'pot_ohm')]
    const gainWith = (Rg: number, gain: number) =>
      lineOf({
        arrangement: 'three-amplifier-grounded',
        signal: [-1 / gain, 1 / gain],
        output: [-1.1, 1.1],
        commonMode: { low: 0, high: 0 },
        values: {
          R1: r3,
          R2: r3,
          Rg,
          R3: 2e4,
          R4: 2e4,
          R5: 2e4 * one(given, 'second_stage_gain'),
          R6: 2e4 * one(given, 'second_stage_gain'),
        },
      }).gain
    expectPublished(entry, 'gain_max', gainWith(r4, 1000))
    expectPublished(entry, 'gain_min', gainWith(r4 + pot, 1))
  })
})

/** Every combination of ±1 in a number of places. */
const corners = (places: number): number[][] =>
  Array.from({ length: 2 ** places }, (_, n) =>
    Array.from({ length: places }, (__, bit) => (n & (1 << bit) ? 1 : -1)),
  )
