import { describe, expect, it } from 'vitest'
import { prepareResponse } from '#shared/analysis/ac.ts'
import { findOvershoot, findSettling, prepareRecovery, prepareStep } from '#shared/analysis/step-response.ts'
import type { Network } from '#shared/network/types.ts'
import { buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/** Equal poles of 1 ms, each behind a buffer of gain one. */
function poles(count: number): Network {
  const bench = new Bench().v('V1', 'b0', 0, '0', 1)
  for (let k = 1; k <= count; k++)
    bench
      .r(`R${k}`, `b${k - 1}`, `x${k}`, 1e3)
      .c(`C${k}`, `x${k}`, '0', 1e-6)
      .e(`E${k}`, `b${k}`, '0', `x${k}`, '0', 1)
  return bench.r('RL', `b${count}`, '0', 1e4).build(`b${count}`)
}

/** Share that equal poles still lack after `turns` time constants: e^−t·Σ t^k/k!. */
function lack(count: number, turns: number): number {
  let [sum, term] = [0, 1]
  for (let k = 0; k < count; k++) {
    sum += term
    term *= turns / (k + 1)
  }
  return sum * Math.exp(-turns)
}

/** Time constants until less than `band` is lacking, by halving. */
function settled(count: number, band: number): number {
  let [low, high] = [0, 200]
  for (let i = 0; i < 100; i++) {
    const middle = (low + high) / 2
    if (lack(count, middle) > band) low = middle
    else high = middle
  }
  return high
}

/** Two poles of quality q at 1 kHz: unity-gain section with an ideal follower. */
function resonant(q: number): Network {
  const [r, c] = [1e4, 1 / (2 * Math.PI * 1e3 * 1e4)]
  return new Bench()
    .v('V1', 'in', 0, '0', 1)
    .r('R1', 'in', 'x', r)
    .r('R2', 'x', 'y', r)
    .c('C1', 'x', 'adc', c * 2 * q)
    .c('C2', 'y', '0', c / (2 * q))
    .e('E1', 'adc', '0', 'y', '0', 1)
    .build()
}

describe.each([1, 2, 3, 4])('%d equal poles', (count) => {
  const step = prepareStep(poles(count), { pace: 160 })

  it('follow their closed form to 1e-10 of the step', () => {
    expectClose(step.final, 1, { relative: 1e-12 })
    for (const turns of [0.01, 0.1, 1, 3, 8, 14, 20, 25])
      expectClose(-step.errorAt(turns * 1e-3), lack(count, turns), { absolute: 1e-10 })
  })

  it.each([10, 16, 24])('settle to half a code of %d bits when they should', (bits) => {
    const band = 2 ** -(bits + 1)
    expectClose(findSettling(step, band) ?? NaN, settled(count, band) * 1e-3, { relative: 1e-6 })
  })

  it('never pass their end', () => {
    expect(findOvershoot(step, 1)).toBeLessThan(1e-9)
  })
})

describe.each([0.8, 2, 10])('two poles of quality %d', (q) => {
  const step = prepareStep(resonant(q), { pace: 1e3 })
  const omega = 2 * Math.PI * 1e3
  const damping = omega / (2 * q)
  const ring = omega * Math.sqrt(1 - 1 / (4 * q * q))
  const exact = (t: number) =>
    -Math.exp(-damping * t) * (Math.cos(ring * t) + (damping / ring) * Math.sin(ring * t))

  it('ring as their closed form', () => {
    for (const t of [1e-5, 2e-4, 5e-4, 1.1e-3, 3.3e-3, 1e-2])
      expectClose(step.errorAt(t), exact(t), { absolute: 1e-9 })
  })

  it('overshoot by exp(−π·damping/ring)', () => {
    expectClose(findOvershoot(step, 0.1), Math.exp((-Math.PI * damping) / ring), { relative: 1e-3 })
  })

  it('settle when the last swing does', () => {
    const band = 2 ** -17
    const found = findSettling(step, band) ?? NaN
    expectClose(Math.abs(exact(found)), band, { relative: 1e-3 })
    for (let t = found * 1.0001; t < 3 * found; t += 1e-5)
      expect(Math.abs(exact(t))).toBeLessThanOrEqual(band)
  })
})

describe('a network of far apart poles', () => {
  const network = new Bench()
    .v('V1', 'in', 0, '0', 1)
    .r('R1', 'in', 'a', 10)
    .c('C1', 'a', '0', 1e-12)
    .e('E1', 'b', '0', 'a', '0', 1)
    .r('R2', 'b', 'adc', 1e6)
    .c('C2', 'adc', '0', 1e-6)
    .build()

  it('is right at the slow one and lets the fast one go', () => {
    const step = prepareStep(network, { pace: 0.16 })
    for (const t of [0.1, 1, 10, 20]) expectClose(-step.errorAt(t), Math.exp(-t), { absolute: 1e-10 })
    expectClose(findSettling(step, 2 ** -25) ?? NaN, 25 * Math.LN2, { relative: 1e-7 })
  })

  it('finds a slow tail behind a fast rise', () => {
    // nine tenths at once, the last tenth in a second
    const tail = new Bench()
      .v('V1', 'in', 0, '0', 1)
      .r('R1', 'in', 'adc', 1e3)
      .r('R2', 'adc', 'x', 9e3)
      .c('C1', 'x', '0', 1e-4)
      .c('C2', 'adc', '0', 1e-9)
      .build()
    const step = prepareStep(tail, { pace: 1e5 })
    expectClose(findSettling(step, 0.01) ?? NaN, Math.log(10), { relative: 2e-3 })
  })
})

describe('a network that does not come to rest', () => {
  it('never settles', () => {
    const part = buildTextbookPart({ gbw: 1e8, rout: 100 })
    const network = new Bench(part)
      .v('V1', 'p', 0, '0', 1)
      .u('U1', 'p', 'm', 'adc')
      .r('RF', 'adc', 'm', 1e5)
      .r('RG', 'm', '0', 1e5)
      .c('CL', 'adc', '0', 1e-8)
      .c('CIN', 'm', '0', 1e-11)
      .build()
    expect(findSettling(prepareStep(network, { pace: 1e6 }), 1e-3)).toBeNull()
  })
})

describe('every kind of network', () => {
  it.each(Object.entries(sampleNetworks()))('%s ends where its response at 0 Hz stands', (_, network) => {
    const step = prepareStep(network, { pace: 1e6 })
    const end = prepareResponse(network)(0).re
    expectClose(step.final, end, { relative: 1e-9 })
    expectClose(step.errorAt(1), 0, { absolute: 1e-9 * Math.abs(end) })
    expect(findSettling(step, 1e-5 * Math.abs(end))).toBeGreaterThan(0)
  })

  it('has as many volts of error at the start as the step is high', () => {
    const step = prepareStep(poles(2), { pace: 160 })
    expectClose(step.errorAt(0), -1, { relative: 1e-12 })
  })
})

describe('the recovery of a node', () => {
  it('is one exponential for a charge on a capacitor behind a resistor', () => {
    const network = new Bench()
      .v('V1', 'in', 2, '0', 1)
      .r('R1', 'in', 'adc', 1e3)
      .c('C1', 'adc', '0', 1e-9)
      .build()
    const recovery = prepareRecovery(network, 'adc', 5, { pace: 160e3 })
    for (const t of [0, 1e-7, 1e-6, 1e-5])
      expectClose(Math.abs(recovery.errorAt(t)), 5 * Math.exp(-t / 1e-6), { absolute: 1e-10 })
    expectClose(findSettling(recovery, 5e-6) ?? NaN, 6 * Math.LN10 * 1e-6, { relative: 1e-6 })
  })

  it('shares the charge of a small capacitor with a large one first', () => {
    const network = new Bench()
      .r('R1', '0', 'adc', 1e6)
      .c('C1', 'adc', '0', 19e-9)
      .r('R2', 'adc', 'hold', 10)
      .c('C2', 'hold', '0', 1e-9)
      .build()
    const recovery = prepareRecovery(network, 'hold', 4, { pace: 1e7 })
    expectClose(Math.abs(recovery.errorAt(3e-7)), (4 / 20) * Math.exp(-3e-7 / (1e6 * 20e-9)), {
      relative: 1e-4,
    })
  })
})
