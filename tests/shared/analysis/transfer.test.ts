import { describe, expect, it } from 'vitest'
import { prepareResponse, solveAc } from '#shared/analysis/ac.ts'
import { assembleSystem, outputVector } from '#shared/analysis/system.ts'
import { prepareTransfers } from '#shared/analysis/transfer.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const frequencies = [0, 1e-3, 1, 47, 1e3, 1e5, 3e6, 1e8]

describe('transfers of the reduced system', () => {
  it.each(Object.entries(sampleNetworks()))('are those of the whole for %s', (_, network) => {
    for (const model of ['real', 'ideal'] as const) {
      const respond = prepareResponse(network, { model })
      for (const frequency of frequencies) {
        const whole = solveAc(network, frequency, { model }).output
        const size = Math.hypot(whole.re, whole.im)
        const ours = respond(frequency)
        expectClose(ours.re, whole.re, { absolute: 1e-10 * size + 1e-20 })
        expectClose(ours.im, whole.im, { absolute: 1e-10 * size + 1e-20 })
      }
    }
  })

  it('answer each right side by itself, and add up', () => {
    const network = sampleNetworks()['three amplifiers']!
    const system = assembleSystem(network, { model: 'real' })
    const { index } = system
    const sides = [...index.nodeAt.values()].filter((row) => row >= 0).map((row) => [{ row, value: 1 }])
    const at = prepareTransfers(system, outputVector(index, network.output), [...sides, sides.flat()])
    for (const frequency of frequencies) {
      const { re } = at(frequency)
      const together = re[sides.length]!
      const sum = re.slice(0, -1).reduce((total, value) => total + value, 0)
      const largest = re.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
      expectClose(sum, together, { absolute: 1e-9 * largest })
    }
  })

  it('leave nothing over where no part has a memory', () => {
    const network = new Bench()
      .v('V1', 'in', 1, '0', 1)
      .r('R1', 'in', 'adc', 1e3)
      .r('R2', 'adc', '0', 3e3)
      .build()
    expectClose(prepareResponse(network)(1e6).re, 0.75, { relative: 1e-12 })
  })

  it('name what is not determined, and refuse frequencies that are none', () => {
    const network = new Bench()
      .v('V1', 'in', 1, '0', 1)
      .c('C1', 'in', 'adc', 1e-9)
      .c('C2', 'adc', '0', 1e-9)
      .build()
    const respond = prepareResponse(network)
    expect(() => respond(0)).toThrow('adc is not determined at 0 Hz')
    for (const frequency of [-1, NaN, Infinity]) expect(() => respond(frequency)).toThrow(RangeError)
  })
})
