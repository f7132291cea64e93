import { describe, expect, it } from 'vitest'
import { solveDc, type Injection } from '#shared/analysis/dc.ts'
import { computeBudget } from '#shared/budget/error-budget.ts'
import { surveyErrors } from '#shared/budget/error-field.ts'
import { factorOf } from '#shared/budget/error-input.ts'
import { inputTerms, lineWeights, placesOf } from '#shared/budget/error-terms.ts'
import { limitTotals, variances } from '#shared/budget/error-totals.ts'
import { cutFactor } from '#shared/numerics/coverage.ts'
import { buildChain } from '#shared/design/chain.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { budgetOf, exact, faultless, noiseOf } from '#tests/support/budgets.ts'
import {
  arrangementDesigns,
  buildConverter,
  buildDesign,
  buildDifferentialSensor,
  buildSensor,
} from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/* Closed forms, the network itself moved by hand, and what must hold for every chain. */

const STATES = ['asBuilt', 'zeroed', 'calibrated'] as const
const noFilter = { filter: { kind: 'none' as const } }
const fine = buildConverter({ bits: 24, guard: { low: 0.02, high: 0.02 } })
const ideal = buildConverter({ bits: 24, guard: { low: 0.02, high: 0.02 }, reference: { voltage: 2.5 } })
const still = { low: 25, high: 25, calibration: 25 }

describe('closed forms', () => {
  const gain = (more: Partial<DesignDocument> = {}) =>
    budgetOf(
      buildDesign({
        sensor: buildSensor(0.05, 0.24, { sourceResistance: 0 }),
        converter: ideal,
        parts: { resistors: { tolerance: 0.01, drift: 0 }, amplifier: faultless },
        choose: noFilter,
        ...more,
      }),
      'non-inverting',
    )

  it('a resistor of a gain moves y by Vout·(1 − 1/G)·t', () => {
    const { trial, line } = gain()
    const { Rf = NaN, Rg = NaN } = trial.spec.stages[0]?.values ?? {}
    const g = 1 + Rf / Rg
    for (const ref of ['Rf', 'Rg'])
      expectClose(line(`${ref}.initial`).asBuilt, 0.24 * g * (1 - 1 / g) * 0.01, { relative: 1e-5 })
  })

  it('a resistor of a divider moves y by Vout·(1 − ratio)·t, and its drift by the kelvins from 25 °C', () => {
    const { trial, line } = budgetOf(
      buildDesign({
        sensor: buildSensor(1, 9, { sourceResistance: 0 }),
        converter: ideal,
        temperature: { low: 5, high: 65, calibration: 25 },
        parts: { resistors: { tolerance: 0.01, drift: 1e-4 }, amplifier: faultless },
        choose: noFilter,
      }),
      'attenuator',
    )
    const { R1 = NaN, R2 = NaN } = trial.spec.stages[0]?.values ?? {}
    const share = R2 / (R1 + R2)
    for (const ref of ['R1', 'R2']) {
      expectClose(line(`${ref}.initial`).asBuilt, 9 * share * (1 - share) * 0.01, { relative: 1e-5 })
      const drift = line(`${ref}.temperature`)
      expectClose(drift.asBuilt, 9 * share * (1 - share) * 1e-4 * 40, { relative: 1e-5 })
      expectClose(drift.limit, 1e-4 * 40, { relative: 1e-12 })
      // A gain error about 0 V: from 1 V to 9 V the shift at the low end goes as well.
      expectClose(drift.zeroed, 9 * share * (1 - share) * 1e-4 * 40, { relative: 1e-5 })
    }
  })

  it('resistors of one ratio that share all of their tolerance move nothing', () => {
    const { budget } = gain({
      parts: { resistors: { tolerance: 0.01, drift: 0, ratioTolerance: 0 }, amplifier: faultless },
    })
    const shared = budget.lines.find(({ id }) => id === 'resistors.initial')
    // faultless amplifiers still have input resistances of 1e15 Ω
    expect(shared?.asBuilt ?? 0).toBeLessThan(1e-9)
  })

  it('offset, currents and rejections act by noise gain and resistances', () => {
    const { trial, line } = gain({
      sensor: buildSensor(0.05, 0.24, { sourceResistance: 1000 }),
      temperature: still,
      rails: { positive: 5, tolerance: 0.1, ripple: 0.02 },
      parts: {
        resistors: exact,
        amplifier: {
          ...faultless,
          a0: 1e5,
          vos: 1e-3,
          ib: 4e-9,
          ios: 2e-9,
          ibDoubling: 0,
          cmrr: 80,
          psrr: 70,
          vosCommonMode: 2,
        },
      },
    })
    const { Rf = NaN, Rg = NaN } = trial.spec.stages[0]?.values ?? {}
    const g = 1 + Rf / Rg
    const within = { relative: 1e-3 }
    expectClose(line('U1.vos').asBuilt, 1e-3 * g, within)
    expectClose(line('U1.ib').asBuilt, 4e-9 * Math.abs(1000 * g - Rf), { relative: 0.01 })
    expectClose(line('U1.ios').asBuilt, 1e-9 * (1000 * g + Rf), within)
    // At 0.05 V the pins stand furthest from the 2 V at which the offset is stated, but all else is largest at 0.24 V.
    const place = (line('U1.loopGain').asBuilt * 1e5) / g ** 2
    expectClose(line('U1.cmrr').asBuilt, (2 - place) * 1e-4 * g, { relative: 5e-3 })
    expectClose(line('U1.psrr').asBuilt, 0.5 * 10 ** (-70 / 20) * g, within)
    expectClose(line('U1.ripple').asBuilt, 0.04 * 10 ** (-70 / 20) * g, within)
    // (1/A)·Vout·G, A between half of a0 and infinity
    expectClose(line('U1.loopGain').asBuilt, (place * g * g) / 1e5, within)
    expect([0.05, 0.24].some((v) => Math.abs(v - place) < 1e-3)).toBe(true)
  })

  it('the converter’s own errors are volts, shares of y and codes', () => {
    const { budget, line, design } = gain({
      converter: {
        ...ideal,
        bits: 12,
        offsetError: 1e-3,
        gainError: 2e-3,
        inl: 1.5,
        offsetDrift: 1e-6,
        gainDrift: 1e-6,
      },
      temperature: { low: 15, high: 35, calibration: 25 },
      parts: { resistors: exact, amplifier: faultless },
    })
    const lsb = 2.5 / 4096
    const top = 2.5 * 0.98
    expectClose(line('converter.offset').asBuilt, 1e-3, { relative: 1e-9 })
    expectClose(line('converter.gain').asBuilt, 2e-3 * top, { relative: 0.01 })
    expectClose(line('converter.offsetDrift').asBuilt, 1e-5, { relative: 1e-9 })
    expectClose(line('converter.gainDrift').asBuilt, 1e-5 * top, { relative: 0.01 })
    expectClose(line('converter.inl').asBuilt, 1.5 * lsb, { relative: 1e-9 })
    expectClose(line('converter.quantisation').asBuilt, lsb / 2, { relative: 1e-9 })
    expect(line('converter.quantisation').unit).toBe('LSB')
    const { low, high } = design.sensor.quantity
    expectClose(
      budget.perQuantity * (high - low),
      (line('converter.gain').asBuilt / 2e-3) * (1 - 0.05 / 0.24),
      {
        relative: 0.01,
      },
    )
  })

  it('leakage of the converter’s pin flows through the filter’s resistance', () => {
    const { line } = gain({
      converter: { ...ideal, inputCurrent: 1e-6 },
      choose: { values: { R9: 1000, C9: 1e-7 } },
      parts: { resistors: exact, amplifier: faultless },
    })
    expectClose(line('converter.inputCurrent').asBuilt, 1e-3, { relative: 1e-6 })
  })

  it('a reference’s output resistance is uncertain by all of itself', () => {
    const { trial, line } = budgetOf(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35, { sourceResistance: 0 }),
        converter: ideal,
        shiftReference: { voltage: 2.5, outputResistance: 10 },
        parts: { resistors: exact, amplifier: faultless },
        choose: noFilter,
      }),
      'non-inverting-up',
    )
    const { R1 = NaN, R2 = NaN, Rf = NaN, Rg = Infinity } = trial.spec.stages[0]?.values ?? {}
    // Current at the low end × 10 Ω, as much of it as reaches y: (Vref − s)/(R1 + R2 + 10)·10·R1/(R1 + R2 + 10)·G
    const sum = R1 + R2 + 10
    expectClose(line('shiftReference.loading').asBuilt, ((2.85 / sum) * 10 * R1 * (1 + Rf / Rg)) / sum, {
      relative: 0.01,
      absolute: Math.abs((0.7 / sum) * 10 * R1 * (1 + Rf / Rg)) / sum,
    })
  })
})

describe('an input that acts at several places', () => {
  const shared = (more: Partial<DesignDocument>) =>
    budgetOf(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35, { sourceResistance: 0 }),
        converter: buildConverter({ bits: 24, reference: { voltage: 2.5, tolerance: 0.01 } }),
        parts: { resistors: exact, amplifier: faultless },
        choose: noFilter,
        ...more,
      }),
      'non-inverting-up',
    )

  it('is summed before squaring: one reference for offset and converter leaves the signal’s part', () => {
    const one = shared({})
    const gain = one.budget.perQuantity * (5 / 0.7)
    expectClose(one.line('converterReference.tolerance').asBuilt, gain * 0.35 * 0.01, { relative: 1e-3 })
    const two = shared({ shiftReference: { voltage: 2.5, tolerance: 0.01 } })
    expectClose(two.line('shiftReference.tolerance').asBuilt, 1.25 * 0.01, { relative: 0.03 })
    expectClose(two.line('converterReference.tolerance').asBuilt, 2.45 * 0.01, { relative: 0.02 })
  })

  it.each(['integrated-instrumentation', 'three-amplifier', 'difference'])(
    'cancels in a ratiometric bridge: below 1 ppm of span with ratio tolerance 0 (%s)',
    (arrangement) => {
      const document = buildDesign({
        sensor: {
          kind: 'bridge',
          quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
          excitation: { same: 'converter', ratioTolerance: 0 },
          sensitivity: 0.002,
        },
        converter: buildConverter({
          reference: { voltage: 2.5, tolerance: 0.01, drift: 1e-4, ageing: 1e-3 },
        }),
        rails: { positive: 5, negative: -5, tolerance: 0.02 },
      })
      const { budget, design, trial } = budgetOf(document, arrangement)
      const field = surveyErrors(design, trial.spec, noiseOf(0))
      const at = field.inputs.findIndex(({ id }) => id === 'converterReference.tolerance')
      expect(at).toBeGreaterThanOrEqual(0)
      const spanned = Math.abs(field.span)
      for (const point of field.points)
        expect(Math.abs(point.slopes[at] ?? NaN) * 0.01).toBeLessThan(1e-6 * spanned)
      expect(budget.lines.filter(({ id }) => id.startsWith('excitation'))).toEqual([])
      const apart = budgetOf(
        {
          ...document,
          sensor: { ...document.sensor, excitation: { same: 'converter', ratioTolerance: 1e-3 } } as never,
        },
        arrangement,
      )
      expectClose(apart.line('excitation.ratioTolerance').asBuilt, 1e-3 * spanned, { relative: 0.1 })
    },
  )
})

describe.each(arrangementDesigns)('the budget of %s', (id, document) => {
  const { budget, design, trial } = budgetOf(document, id, noiseOf(4e-5, 1e-5))
  const field = surveyErrors(design, trial.spec, noiseOf(4e-5, 1e-5))

  it('keeps root of squares and expanded uncertainty inside the worst case, in every state', () => {
    for (const state of STATES) {
      const { worst, rss, expanded, standard, k } = budget.totals[state]
      expect(rss).toBeLessThanOrEqual(worst)
      expect(expanded).toBeLessThanOrEqual(worst * (1 + 1e-9))
      expect(standard).toBeGreaterThan(0)
      expectClose(k, expanded / standard, { relative: 1e-12 })
    }
  })

  it('has lines that add up to its totals', () => {
    for (const state of STATES) {
      const sum = budget.lines.reduce((total, line) => total + line[state], 0)
      expect(sum).toBeLessThanOrEqual(budget.totals[state].worst * (1 + 1e-9))
      expect(sum).toBeGreaterThan(0.8 * budget.totals[state].worst)
    }
    const shares = budget.lines.reduce((total, line) => total + line.share, 0)
    expectClose(shares, 1, { absolute: 1e-9 })
    const { standard } = budget.totals.calibrated
    expectClose(Math.hypot(...budget.lines.map((line) => line.standard)), standard, { relative: 1e-9 })
  })

  it('has a line for every input that can act', () => {
    const known = new Set(budget.lines.map((line) => line.id))
    const absent = field.inputs.filter((input) => !known.has(input.id) && !input.id.endsWith('.selfHeating'))
    for (const input of absent) {
      const at = field.inputs.indexOf(input)
      for (const point of field.points) expect(point.slopes[at], input.id).toBe(0)
    }
    for (const line of budget.lines)
      expect(Math.max(line.asBuilt, line.zeroed, line.calibrated)).toBeGreaterThanOrEqual(0)
  })

  it('leaves nothing at the adjustment points but resolution, and drift since', () => {
    const places = placesOf(field)
    const terms = inputTerms(field)
    for (const [k, point] of field.adjusted.entries()) {
      const at = places.findIndex(
        ({ quantity, temperature }) =>
          quantity === point.quantity && temperature === design.temperature.calibration,
      )
      expect(at).toBeGreaterThanOrEqual(0)
      const place = places[at]
      terms.forEach((term, i) => {
        const input = field.inputs[i]
        if (!input || !place) throw new Error('every term has its input')
        const slope = point.slopes[i] ?? NaN
        const since =
          input.behaviour === 'resolution'
            ? slope
            : slope * (factorOf(input, place.condition) - factorOf(input, field.calibration))
        expectClose(term.residuals.calibrated[at] ?? NaN, since, {
          absolute: 1e-12 * Math.abs(slope) + 1e-18,
        })
        if (k === 0)
          expectClose(term.residuals.zeroed[at] ?? NaN, since, { absolute: 1e-12 * Math.abs(slope) + 1e-18 })
      })
    }
    for (const q of field.adjusted.map((p) => p.quantity)) {
      const [l0, l1] = lineWeights(field, q)
      expect([Math.abs(l0), Math.abs(l1)].sort()).toEqual([0, 1])
    }
  })

  it('does not depend on the order of its parts', () => {
    const terms = inputTerms(field)
    const backwards = [...terms].reverse()
    for (const state of STATES) {
      const [there, back] = [limitTotals(terms, state), limitTotals(backwards, state)]
      expectClose(back.worst, there.worst, { relative: 1e-12 })
      expectClose(back.rss, there.rss, { relative: 1e-12 })
      const [first, second] = [variances(terms, state), variances(backwards, state)]
      first.forEach((value, p) => expectClose(second[p] ?? NaN, value, { relative: 1e-12 }))
    }
    const turned = Object.fromEntries(Object.entries(document).reverse()) as unknown as DesignDocument
    const renamed: DesignDocument = {
      ...turned,
      name: 'Another name',
      parts: { ...document.parts, amplifier: { ...document.parts?.amplifier, name: 'another name' } },
    }
    expect(budgetOf(renamed, id, noiseOf(4e-5, 1e-5)).budget.totals).toEqual(budget.totals)
  })
})

describe('sensitivities', () => {
  it.each(
    arrangementDesigns.filter(([id]) =>
      ['non-inverting-up', 'weighted-difference', 'three-amplifier', 'integrated-instrumentation'].includes(
        id,
      ),
    ),
  )('are what the network does when each input is moved by hand (%s)', (id, document) => {
    const design = parseDesign({
      ...document,
      converter: { ...document.converter, inputCurrent: 1e-8 },
      parts: { amplifier: { a0: 1e5 } },
    })
    const trial = buildTrial(design, id)
    const field = surveyErrors(design, trial.spec, noiseOf(0))
    const q = design.sensor.quantity.high
    const point = field.points.find(({ quantity }) => quantity === q)
    const { network, errors } = buildChain(design, trial.spec, q)
    const reference = errors[0]?.reference
    let moved = 0
    field.inputs.forEach((input, i) => {
      if (input.effects.length === 0 || input.onOutput) return
      // 1 % of the limit, so that only the first order shows
      const at = (x: number): number => {
        const set: Record<string, number> = {}
        const extra: Injection[] = []
        for (const { ref, port, scale, relative } of input.effects) {
          const e = network.elements.find((known) => known.ref === ref)
          const value = e && 'value' in e ? e.value : e && 'gain' in e ? e.gain : 1
          if (relative) set[ref] = value * (1 + scale * x)
          else
            extra.push({
              ref,
              port,
              amount: scale * x,
              ...(port === 'cmrr' ? { reference } : {}),
            } as Injection)
        }
        return solveDc(network, { model: 'real', set, extra }).output
      }
      const step = input.limit / 100
      const slope = (at(step) - at(-step)) / (2 * step)
      expectClose(point?.slopes[i] ?? NaN, slope, { relative: 1e-4, absolute: 1e-10 / step })
      moved++
    })
    expect(moved).toBeGreaterThan(10)
  })
})

describe('adjustment', () => {
  const bipolar = (more: Partial<DesignDocument> = {}) =>
    budgetOf(
      buildDesign({
        sensor: buildSensor(-1, 1, { sourceResistance: 0 }),
        converter: buildConverter({
          input: { low: -2.5, high: 2.5 },
          bits: 20,
          reference: { voltage: 2.5 },
          gainError: 1e-3,
          guard: { low: 0.02, high: 0.02 },
        }),
        rails: { positive: 5, negative: -5 },
        parts: { resistors: exact, amplifier: faultless },
        choose: noFilter,
        ...more,
      }),
      'non-inverting',
    )

  it('of zero alone makes a gain error about 0 V worse when it is made at the low end, and says so', () => {
    const { budget, line } = bipolar()
    expect(budget.zeroingHurts).toBe(true)
    expectClose(line('converter.gain').zeroed, 2 * line('converter.gain').asBuilt, { relative: 1e-6 })
    expect(budget.totals.zeroed.expanded).toBeGreaterThan(1.9 * budget.totals.asBuilt.expanded)
    expect(line('converter.gain').calibrated).toBeLessThan(1e-12)
    expect(line('converter.gain').calibrates).toBe('span')
  })

  it('of zero in the middle of the span leaves it as it was', () => {
    const { budget, line } = bipolar({ calibration: { points: [0] } })
    expect(budget.points).toEqual([0, 2.5])
    expectClose(line('converter.gain').zeroed, line('converter.gain').asBuilt, { relative: 1e-6 })
  })

  it('takes an offset away and leaves its drift from the calibration temperature', () => {
    const { budget, line } = bipolar({
      temperature: { low: 0, high: 60, calibration: 20 },
      parts: { resistors: exact, amplifier: { ...faultless, vos: 1e-3, vosDrift: 1e-5 } },
    })
    expect(budget.zeroingHurts).toBe(true)
    const gain = line('U1.vos').asBuilt / 1e-3
    expect(line('U1.vos').zeroed).toBe(0)
    expect(line('U1.vos').calibrates).toBe('zero')
    expectClose(line('U1.vosDrift').asBuilt, 35e-5 * gain, { relative: 1e-9 })
    // 60 °C less 20 °C
    expectClose(line('U1.vosDrift').calibrated, 40e-5 * gain, { relative: 1e-9 })
    expect(budget.totals.calibrated.temperature).toBe(60)
  })

  it('counts the sensor’s own temperature where it has one', () => {
    const { line } = bipolar({
      sensor: buildSensor(-1, 1, {
        sourceResistance: 0,
        temperature: { low: -40, high: 30 },
        accuracy: { zeroDrift: 1e-4 },
      }),
      temperature: { low: 20, high: 30, calibration: 20 },
    })
    const span = line('sensor.zeroDrift').asBuilt / (65 * 1e-4)
    expectClose(line('sensor.zeroDrift').calibrated, 60 * 1e-4 * span, { relative: 1e-9 })
  })

  it('lets ageing run for the calibration interval', () => {
    const aged = (interval: number) =>
      bipolar({
        calibration: { interval },
        converter: buildConverter({
          input: { low: -2.5, high: 2.5 },
          bits: 20,
          reference: { voltage: 2.5, ageing: 1e-4 },
          gainError: 1e-3,
          guard: { low: 0.02, high: 0.02 },
        }),
      })
    const [one, three] = [aged(1), aged(3)].map(({ line }) => line('converterReference.ageing'))
    expectClose(three?.calibrated ?? NaN, 3 * (one?.calibrated ?? NaN), { relative: 1e-9 })
    expectClose(three?.limit ?? NaN, 3e-4, { relative: 1e-12 })
    // Both are shares of y: a tenth of a gain error of 1e-3.
    expectClose(one?.calibrated ?? NaN, aged(1).line('converter.gain').asBuilt / 10, { relative: 1e-9 })
  })

  it('never takes away what is another at every reading', () => {
    const { line } = budgetOf(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35, { accuracy: { repeatability: 1e-3, linearity: 1e-3 } }),
        converter: buildConverter({ inl: 1 }),
      }),
      'non-inverting-up',
      noiseOf(1e-4),
    )
    for (const id of [
      'sensor.repeatability',
      'sensor.linearity',
      'converter.inl',
      'converter.quantisation',
      'noise',
    ]) {
      expectClose(line(id).calibrated, line(id).asBuilt, { relative: 0.02 })
      expect(line(id).calibrates).toBe('none')
    }
  })

  it('brings in the standard, averaged noise and one code at each point', () => {
    const { budget, line } = bipolar({ calibration: { points: [-2.5, 2.5], standardUncertainty: 5e-4 } })
    const span = budget.perQuantity * 5
    expect(line('calibration.standard.1').asBuilt).toBe(0)
    expectClose(line('calibration.standard.1').zeroed, 5e-4 * span, { relative: 1e-9 })
    expect(line('calibration.standard.2').zeroed).toBe(0)
    const lsb = 5 / 2 ** 20
    expectClose(line('calibration.code.1').zeroed, lsb / 2, { relative: 1e-9 })
    const both = line('calibration.standard.1').calibrated + line('calibration.standard.2').calibrated
    // At an end one point counts in full and the other not at all; in between their weights add up to one.
    expectClose(both, 5e-4 * span, { relative: 1e-9 })
    const noisy = budgetOf(
      buildDesign({ sensor: buildSensor(-0.35, 0.35) }),
      'non-inverting-up',
      noiseOf(8e-5),
    )
    expectClose(noisy.line('calibration.noise.1').zeroed, (3.3 * 8e-5) / 8, { relative: 1e-9 })
  })

  it('grows beyond the points it was made at, as a line does', () => {
    const { line, design } = bipolar({ calibration: { points: [-1, 1], standardUncertainty: 5e-4 } })
    expect(design.calibration.points).toEqual([-1, 1])
    const near = line('calibration.standard.2')
    const far = line('calibration.standard.1')
    // At 2.5: weights 1.75 and −0.75
    const weights = [near.calibrated, far.calibrated].map(
      (v) => v / near.limit / (line('calibration.standard.1').zeroed / near.limit),
    )
    expectClose(Math.max(...weights), 1.75, { relative: 1e-9 })
    expectClose(Math.min(...weights), 0.75, { relative: 1e-9 })
  })
})

describe('common mode', () => {
  it('makes resistor mismatch count in proportion, though its middle is 0 V', () => {
    const { budget, line, trial } = budgetOf(
      buildDesign({
        sensor: buildDifferentialSensor(-0.5, 0.5, { low: -2, high: 2 }),
        converter: fine,
        rails: { positive: 8, negative: -8 },
        parts: { resistors: { tolerance: 1e-3, drift: 0 }, amplifier: faultless },
        choose: noFilter,
      }),
      'difference',
    )
    const { R1 = NaN, R2 = NaN } = trial.spec.stages[0]?.values ?? {}
    const gain = R2 / R1
    // R4 off by t: y moves by (V(+ leg) − level)·G/(1 + G)·t, the level being y at no signal
    const signal = budget.totals.asBuilt.at / 5
    const leg = (commonMode: number) => Math.abs(commonMode + signal / 2 - 1.25)
    expectClose(line('R4.initial').asBuilt, Math.max(leg(-2), leg(2)) * (gain / (1 + gain)) * 1e-3, {
      relative: 0.01,
    })
    // It moves again after any adjustment.
    expect(line('R4.initial').calibrated).toBeGreaterThan(0.5 * line('R4.initial').asBuilt)
  })
})

describe('distributions', () => {
  const with_ = (distribution: 'rectangular' | 'normal') =>
    budgetOf(
      buildDesign({
        sensor: buildSensor(0.05, 0.24, { sourceResistance: 0 }),
        converter: ideal,
        temperature: still,
        parts: { resistors: { tolerance: 0.01, drift: 0 }, amplifier: faultless },
        choose: noFilter,
        analysis: { distribution },
        target: { limit: 0.01, state: 'asBuilt' },
      }),
      'non-inverting',
    )

  it('are a/√3, or a third of the limit cut there', () => {
    const [flat, peaked] = [with_('rectangular'), with_('normal')]
    const a = flat.line('Rf.initial').asBuilt
    expectClose(flat.line('Rf.initial').standard, a / Math.sqrt(3), { relative: 1e-12 })
    expectClose(peaked.line('Rf.initial').standard, (a / 3) * cutFactor(3), { relative: 1e-9 })
    // Two equal rectangular terms: a triangle.
    const { totals } = flat.budget
    expect(totals.asBuilt.coverageBy).toBe('quantile')
    expectClose(totals.asBuilt.expanded, 2 * a * (1 - Math.sqrt(0.05)), { relative: 1e-3 })
  })
})

describe('target', () => {
  const wanted = (target: DesignDocument['target']) =>
    budgetOf({ ...buildDesign({ sensor: buildSensor(-0.35, 0.35) }), target }, 'non-inverting-up').budget

  it('is a share of the span, or a measurand, in the state it is stated for', () => {
    const bySpan = wanted({ limit: 0.01 })
    expectClose(bySpan.target?.limit ?? NaN, 0.01 * 5 * bySpan.perQuantity, { relative: 1e-12 })
    expect(bySpan.target?.state).toBe('calibrated')
    expect(bySpan.target?.met).toBe(true)
    const byQuantity = wanted({ limit: 0.05, per: 'quantity', state: 'asBuilt' })
    expectClose(byQuantity.target?.limit ?? NaN, 0.05 * byQuantity.perQuantity, { relative: 1e-12 })
    expect(wanted({ limit: 1e-5 }).target?.met).toBe(false)
    expect(wanted(undefined).target).toBeNull()
  })

  it('is judged at the coverage asked for', () => {
    const [usual, more] = [wanted({ limit: 0.01 }), wanted({ limit: 0.01, coverage: 0.99 })]
    expect(more.coverage).toBe(0.99)
    expect(more.totals.calibrated.expanded).toBeGreaterThan(1.2 * usual.totals.calibrated.expanded)
  })
})

it('takes its noise from the summary as it stands', () => {
  const document = buildDesign({ sensor: buildSensor(-0.35, 0.35) })
  const design = parseDesign(document)
  const { spec } = buildTrial(design, 'non-inverting-up')
  const noise = (rms: number) =>
    computeBudget(design, spec, noiseOf(rms)).lines.find(({ id }) => id === 'noise')?.asBuilt ?? 0
  expectClose(noise(2e-5), 6.6e-5, { relative: 1e-12 })
  expect(noise(0)).toBe(0)
})
