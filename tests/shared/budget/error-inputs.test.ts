import { describe, expect, it } from 'vitest'
import { factorOf, growthOf, type ErrorInput } from '#shared/budget/error-input.ts'
import { errorInputs, NOISE_DEVIATIONS } from '#shared/budget/error-inputs.ts'
import { buildChain } from '#shared/design/chain.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import cases from '#tests/fixtures/error-cases.json' with { type: 'json' }
import { noiseOf } from '#tests/support/budgets.ts'
import { arrangementDesigns, buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

const inputsOf = (document: DesignDocument, id: string, quantity = 0, noise = noiseOf(1e-5)) => {
  const design = parseDesign(document)
  const trial = buildTrial(design, id)
  const chain = buildChain(design, trial.spec, quantity)
  return { design, chain, inputs: errorInputs(design, chain, noise) }
}

const accuracy = {
  zero: 1e-3,
  span: 1e-3,
  linearity: 1e-3,
  repeatability: 1e-3,
  zeroDrift: 1e-5,
  spanDrift: 1e-5,
  ageing: 1e-3,
}
const converter = buildConverter({
  reference: { voltage: 2.5, tolerance: 1e-3, drift: 1e-5, ageing: 1e-4, outputResistance: 1 },
  offsetError: 1e-3,
  gainError: 1e-3,
  inl: 1,
  offsetDrift: 1e-6,
  gainDrift: 1e-6,
  inputCurrent: 1e-9,
})

/** Every figure that a design can state as uncertain is not zero. */
const uncertain = buildDesign({
  sensor: buildSensor(-0.35, 0.35, { accuracy }),
  converter,
  rails: { positive: 5, tolerance: 0.02, ripple: 0.01 },
  shiftReference: { voltage: 2.5, tolerance: 1e-3, drift: 1e-5, ageing: 1e-4, outputResistance: 1 },
  parts: { resistors: { tolerance: 1e-3, drift: 1e-5, ageing: 1e-4 }, amplifier: { ib: 1e-10, ios: 1e-10 } },
})

const bridge = (excitation: object): DesignDocument =>
  buildDesign({
    sensor: {
      kind: 'bridge',
      quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
      excitation: { voltage: 5, ...excitation },
      sensitivity: 0.002,
      sensitivityTolerance: 1e-3,
      zeroBalance: 1e-5,
      sourceResistance: 10,
      sourceMismatch: 0.01,
      accuracy,
    },
    rails: { positive: 6, tolerance: 0.02, ripple: 0.001 },
  })

describe('every uncertain input', () => {
  it('of a single-ended chain is there, by its own name', () => {
    const { inputs } = inputsOf(uncertain, 'non-inverting-up')
    expect(inputs.map(({ id }) => id).sort()).toEqual(
      [
        ...Object.keys(accuracy).map((key) => `sensor.${key}`),
        ...['R1', 'R2', 'Rf', 'Rg', 'R9'].flatMap((ref) =>
          ['initial', 'temperature', 'ageing', 'selfHeating'].map((what) => `${ref}.${what}`),
        ),
        ...['vos', 'vosDrift', 'ib', 'ios', 'cmrr', 'psrr', 'ripple', 'loopGain'].map((what) => `U1.${what}`),
        ...['converterReference', 'shiftReference'].flatMap((reference) =>
          ['tolerance', 'drift', 'ageing'].map((what) => `${reference}.${what}`),
        ),
        'shiftReference.loading',
        ...['offset', 'offsetDrift', 'gain', 'gainDrift', 'inl', 'quantisation', 'inputCurrent'].map(
          (what) => `converter.${what}`,
        ),
        'noise',
      ].sort(),
    )
  })

  it('of a bridge and an integrated amplifier is there too', () => {
    const ids = inputsOf(bridge({ tolerance: 1e-3, drift: 1e-5 }), 'integrated-instrumentation').inputs.map(
      ({ id }) => id,
    )
    expect(ids).toEqual(
      expect.arrayContaining([
        'sensor.zeroBalance',
        'sensor.sensitivityTolerance',
        'excitation.tolerance',
        'excitation.drift',
        'RSOURCEP.initial',
        'RSOURCEN.initial',
        'U1.gain',
        'U1.gainDrift',
        'U1.nonlinearity',
      ]),
    )
    expect(ids.filter((id) => id.startsWith('RU1') || id === 'U1.loopGain')).toEqual([])
    const shared = inputsOf(
      bridge({ same: 'positive', voltage: undefined, ratioTolerance: 1e-4 }),
      'difference',
    )
    const shares = shared.inputs.map(({ id }) => id)
    expect(shares).toEqual(
      expect.arrayContaining(['positiveRail.tolerance', 'positiveRail.ripple', 'excitation.ratioTolerance']),
    )
    expect(shares).not.toContain('excitation.tolerance')
  })

  it('has a field of the design that sets it, but noise', () => {
    const { inputs, design } = inputsOf(uncertain, 'non-inverting-up')
    for (const { id, path } of inputs) {
      if (id === 'noise') continue
      const found = path
        ?.split('.')
        .reduce<unknown>((at, key) => (at as Record<string, unknown> | undefined)?.[key], design)
      expect(found, `${id} at ${path}`).toBeDefined()
    }
  })

  it('is absent where its limit is zero', () => {
    const { inputs } = inputsOf(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35),
        converter: buildConverter({ reference: { voltage: 2.5 } }),
        rails: { positive: 5 },
        parts: {
          resistors: { tolerance: 0, drift: 0 },
          amplifier: { vos: 0, vosDrift: 0, ib: 0, ios: 0 },
        },
      }),
      'non-inverting-up',
      0,
      noiseOf(0),
    )
    expect(inputs.map(({ id }) => id).sort()).toEqual(['U1.cmrr', 'U1.loopGain', 'converter.quantisation'])
  })

  it.each(arrangementDesigns)('has one name, the same list at every measurand (%s)', (id, document) => {
    const at = (quantity: number) => inputsOf(document, id, quantity).inputs.map((input) => input.id)
    const ids = at(-2.5)
    expect(new Set(ids).size).toBe(ids.length)
    expect(at(1)).toEqual(ids)
  })

  it('is rectangular or normal as the design says, but for what has a distribution of its own', () => {
    const { inputs } = inputsOf({ ...uncertain, analysis: { distribution: 'normal' } }, 'non-inverting-up')
    const own = inputs.filter(({ distribution }) => distribution === 'rectangular').map(({ id }) => id)
    expect(own).toEqual(['shiftReference.loading', 'U1.loopGain', 'converter.quantisation'])
  })
})

/** Sum of limits over temperature and time of the inputs that act on one source or resistor, in its own unit. */
function reachOf(design: Design, inputs: ErrorInput[], ref: string, port: string, value = 1): number {
  const { temperature, calibration } = design
  const years = calibration.interval
  const ends = [temperature.low, temperature.high].map((t) => ({
    temperature: t,
    sensorTemperature: t,
    years,
  }))
  return inputs
    .filter(({ id }) => !id.endsWith('selfHeating') && id !== 'shiftReference.loading')
    .flatMap((input) =>
      input.effects
        .filter((effect) => effect.ref === ref && effect.port === port)
        .map(
          (effect) =>
            input.limit *
            Math.abs(effect.scale) *
            (effect.relative ? value : 1) *
            Math.max(...ends.map((at) => Math.abs(factorOf(input, at)))),
        ),
    )
    .reduce((sum, part) => sum + part, 0)
}

describe('limits and the box of the bounds', () => {
  it.each([
    ['non-inverting-up', uncertain],
    [
      'non-inverting-up',
      {
        ...uncertain,
        parts: { resistors: { tolerance: 2e-3, drift: 2e-5, tracking: 1e-5, ratioTolerance: 1e-3 } },
      },
    ],
    ['two-amplifier', bridge({ tolerance: 1e-3, drift: 1e-5 })],
    ['integrated-instrumentation', bridge({ same: 'converter', voltage: undefined, ratioTolerance: 1e-4 })],
  ] satisfies [string, DesignDocument][])('are the same (%s)', (id, document) => {
    const { design, chain, inputs } = inputsOf(document, id, 1)
    for (const { ref, relative } of chain.resistors) {
      const element = chain.network.elements.find((e) => e.ref === ref)
      if (element?.kind === 'resistor' && element.group === 'internal') continue
      expectClose(reachOf(design, inputs, ref, 'value'), relative, { relative: 1e-9 })
    }
    // Every source of the box, with all variables that move it.
    const sources = new Map<string, number>()
    for (const v of chain.variables)
      for (const { ref, port, scale } of v.injections)
        if (port === 'value')
          sources.set(`${ref} ${port}`, (sources.get(`${ref} ${port}`) ?? 0) + ((v.high - v.low) / 2) * scale)
    for (const [key, half] of sources) {
      const [ref = '', port = ''] = key.split(' ')
      // The rails themselves act by the amplifiers' rejection.
      if (ref === 'VPOS' || ref === 'VNEG') continue
      const element = chain.network.elements.find((e) => e.ref === ref)
      const value = element && 'value' in element ? Math.abs(element.value) : 1
      expectClose(reachOf(design, inputs, ref, port, value), half, { relative: 1e-9, absolute: 1e-15 })
    }
    for (const e of chain.errors) {
      const box = (name: string) => {
        const v = chain.variables.find((known) => known.id === `${e.ref}.${name}`)
        return v ? (v.high - v.low) / 2 : 0
      }
      expectClose(
        reachOf(design, inputs, e.ref, 'vos'),
        box('vos') + box('psrr') + nonlinearity(inputs, e.ref),
        {
          relative: 1e-9,
        },
      )
    }
  })
})

/** An integrated part's nonlinearity is drawn at its input, but bends no bound. */
const nonlinearity = (inputs: ErrorInput[], ref: string): number =>
  inputs
    .filter(({ id }) => id.endsWith('.nonlinearity'))
    .flatMap(({ limit, effects }) => effects.filter((e) => e.ref === ref).map((e) => limit * e.scale))
    .reduce((sum, part) => sum + part, 0)

describe('resistors that keep to each other', () => {
  const tracked = (more: object) =>
    inputsOf(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35),
        parts: { resistors: { tolerance: 1e-3, drift: 2e-5, ...more } },
      }),
      'non-inverting-up',
    ).inputs

  it('have their drift in common, and each its own half of the tracking', () => {
    const inputs = tracked({ tracking: 4e-6 })
    const shared = inputs.find(({ id }) => id === 'resistors.temperature')
    expect(shared?.group).toBe('resistors')
    expectClose(shared?.limit ?? NaN, 2e-5 - 2e-6, { relative: 1e-12 })
    expect(shared?.effects.map(({ ref }) => ref).sort()).toEqual(['R1', 'R2', 'R9', 'Rf', 'Rg'])
    expectClose(inputs.find(({ id }) => id === 'Rf.tracking')?.limit ?? NaN, 2e-6, { relative: 1e-12 })
    expect(inputs.some(({ id }) => id === 'Rf.temperature')).toBe(false)
  })

  it('with a ratio tolerance of zero have all of their tolerance in common', () => {
    const inputs = tracked({ ratioTolerance: 0 })
    expect(inputs.find(({ id }) => id === 'resistors.initial')?.limit).toBe(1e-3)
    expect(inputs.some(({ id }) => id.endsWith('.ratio') || id === 'Rf.initial')).toBe(false)
  })
})

describe('factors', () => {
  it('double a bias current every so many kelvins, as published', () => {
    const found = cases.find(({ id }) => id === 'bias-current-doubling')
    const { IB25_A = NaN, T_C = NaN } = found?.given as { IB25_A?: number; T_C?: number }
    const { IB_A = NaN } = found?.recomputed as { IB_A?: number }
    expectClose(IB25_A * growthOf(10, T_C), IB_A, { relative: 1e-8 })
    expect(growthOf(0, 100)).toBe(1)
  })

  it('count kelvins from 25 °C, of the electronics or of the sensor, and years', () => {
    const at = { temperature: 60, sensorTemperature: -10, years: 2 }
    expect(factorOf({ behaviour: 'temperature' }, at)).toBe(35)
    expect(factorOf({ behaviour: 'sensor-temperature' }, at)).toBe(-35)
    expect(factorOf({ behaviour: 'ageing' }, at)).toBe(2)
    expect(factorOf({ behaviour: 'constant' }, at)).toBe(1)
    expect(factorOf({ behaviour: 'resolution' }, at)).toBe(1)
    expectClose(factorOf({ behaviour: 'bias', doubling: 10 }, at), 2 ** 3.5 - 1, { relative: 1e-12 })
    expectClose(factorOf({ behaviour: 'bias-mismatch', doubling: 10 }, at), 2 ** 3.5, { relative: 1e-12 })
    expect(factorOf({ behaviour: 'bias', doubling: 10 }, { ...at, temperature: 25 })).toBe(1)
  })
})

describe('noise', () => {
  it('is 3.3 standard deviations, quantisation left to its own line', () => {
    const { inputs } = inputsOf(uncertain, 'non-inverting-up', 0, noiseOf(5e-5, 3e-5))
    const noise = inputs.find(({ id }) => id === 'noise')
    expectClose(noise?.limit ?? NaN, NOISE_DEVIATIONS * 4e-5, { relative: 1e-12 })
    expect(noise?.distribution).toBe('normal')
  })
})
