import { describe, expect, it } from 'vitest'
import type { ModelEntry } from '#shared/design/plan.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen } from '#tests/support/plans.ts'

/*
 * One pole: A(f) = A0/(1 + j·f·A0/GBW), so that T = A(f)·β and |T/(1+T)| falls as 1/√(1 + (f/fc)²) from its DC value, with
 * fc = (1 + T0)·GBW/A0. Closed forms throughout.
 */

const A0 = 1e5
const GBW = 1e6
const values = { Rf: 90000, Rg: 10000 }
const BETA = 0.1
const T0 = A0 * BETA
const CORNER = ((1 + T0) * GBW) / A0

const part = {
  a0: A0,
  gbw: GBW,
  rin: 1e15,
  rcm: 1e15,
  rout: 1e-3,
  ib: 0,
  cin: { common: 0, differential: 0 },
}

interface Options {
  bandwidth?: number
  modelError?: number
  amplifier?: object
  bits?: number
}

function checked({ bandwidth, modelError = 0.5, amplifier = {}, bits = 12 }: Options): {
  entry: ModelEntry
  span: number
  lsb: number
} {
  const sensor = buildSensor(0.02, 0.24, { sourceResistance: 0 })
  if (bandwidth === undefined) delete sensor.bandwidth
  else sensor.bandwidth = bandwidth
  const chosen = planChosen(
    buildDesign({
      sensor,
      converter: buildConverter({ bits }),
      parts: { resistors: { tolerance: 0, drift: 0 }, amplifier: { ...part, ...amplifier } },
      rules: { modelError },
      choose: { arrangement: 'non-inverting', values, filter: { kind: 'none' } },
    }),
  )
  const { low, high } = chosen.realised.converter
  return { entry: chosen.model[0]!, span: high - low, lsb: 2.5 / 2 ** bits }
}

describe('the residue of one amplifier', () => {
  const bandwidth = 3000
  const { entry, span, lsb } = checked({ bandwidth })
  const codes = span / lsb

  it('has the loop gain A0·β at DC', () => {
    expectClose(entry.loopGain, T0, { relative: 1e-6 })
  })

  it('has the gain error −1/(1 + T), in ppm and in LSB', () => {
    expectClose(entry.gainErrorPpm, -1e6 / (1 + T0), { relative: 1e-6 })
    expectClose(entry.gainErrorLsb, codes / (1 + T0), { relative: 1e-6 })
  })

  it('has Vout/A0 between its inputs at full scale', () => {
    expectClose(entry.inputVolts, (0.24 * 10 * T0) / (1 + T0) / A0, { relative: 1e-6 })
  })

  it('has the magnitude error, phase and delay of one pole at the signal bandwidth', () => {
    const ratio = bandwidth / CORNER
    expectClose(entry.atBandwidthLsb ?? NaN, codes * (1 - 1 / Math.hypot(1, ratio)), { relative: 1e-6 })
    const phase = (-Math.atan(ratio) * 180) / Math.PI
    expectClose(entry.phaseAtBandwidth ?? NaN, phase, { relative: 1e-6 })
    expectClose(entry.delayAtBandwidth ?? NaN, -phase / 360 / bandwidth, { relative: 1e-6 })
  })

  it('holds up to where that error passes the allotment: about fc·√(2ε)', () => {
    const epsilon = 0.5 / codes
    const expected = CORNER * Math.sqrt(1 / (1 - epsilon) ** 2 - 1)
    expectClose(entry.holdsTo ?? NaN, expected, { relative: 1e-6 })
    expectClose(entry.holdsTo ?? NaN, CORNER * Math.sqrt(2 * epsilon), { relative: 1e-3 })
  })

  it('holds to 0.142 of the corner for one per cent, as textbooks say', () => {
    const one = checked({ modelError: 0.01 * codes }).entry
    expectClose((one.holdsTo ?? NaN) / CORNER, 0.1425, { relative: 1e-3 })
  })

  it('counts what the amplifier’s own resistances take from the loop', () => {
    const rout = 1000
    const rin = 5000
    const loaded = checked({ amplifier: { rout, rin } }).entry
    // The + input is held by the source: rin lies beside Rg, and Rout before Rf.
    const lower = 1 / (1 / values.Rg + 1 / rin)
    const beta = lower / (lower + values.Rf + rout)
    expectClose(loaded.loopGain, A0 * beta, { relative: 1e-5 })
  })
})

describe('the verdict', () => {
  it('is clear where the ideal model holds beyond the bandwidth, with the figures behind it', () => {
    const { entry } = checked({ bandwidth: 100 })
    expect([entry.state, entry.verdict.code]).toEqual(['clear', 'good-enough'])
    expect(entry.verdict.numbers.holdsTo).toBe(entry.holdsTo)
    expect(entry.verdict.text).toMatch(/LSB/)
    expect(entry.verdict.text).not.toMatch(/\bOK\b/i)
  })

  it('is over where the signal goes further than the model holds', () => {
    const { entry } = checked({ bandwidth: 20000 })
    expect([entry.state, entry.verdict.code]).toEqual(['over', 'too-slow'])
    expect(entry.verdict.text).toMatch(/faster amplifier, or less gain/)
  })

  it('holds nowhere where the DC error is already more, and says that calibration removes it', () => {
    const { entry } = checked({ amplifier: { a0: 1000 }, bits: 16 })
    expect(entry.holdsTo).toBeNull()
    expect([entry.state, entry.verdict.code]).toEqual(['tight', 'dc-error'])
    expect(entry.verdict.text).toMatch(/calibration/)
  })

  it('compares with nothing where the design states no bandwidth', () => {
    const { entry } = checked({})
    expect([entry.state, entry.verdict.code]).toEqual(['clear', 'holds-to'])
    expect([entry.atBandwidthLsb, entry.phaseAtBandwidth, entry.delayAtBandwidth]).toEqual([null, null, null])
  })

  it('stands for every amplifier of the chain', () => {
    const chosen = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up' } }))
    const amplifiers = chosen.components.filter((c) => c.kind === 'amplifier').map((c) => c.ref)
    expect(chosen.model.map((m) => m.amplifier)).toEqual(amplifiers)
  })
})
