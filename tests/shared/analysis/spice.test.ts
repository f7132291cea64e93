import { describe, expect, it } from 'vitest'
import { solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runAc, runOp } from '#tests/support/ngspice.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'

describe.each(Object.entries(sampleNetworks()))('%s in ngspice', (title, network) => {
  it('has the same operating point within 1 nV at every node', async () => {
    const judged = await runOp(toSpice({ ...network, title }))
    const { voltages } = solveDc(network, { model: 'real' })
    for (const [node, voltage] of Object.entries(voltages)) {
      expectClose(voltage, judged[node.toLowerCase()] ?? NaN, { absolute: 1e-9 })
    }
  })

  it('has the same frequency response within 1 ppb from 1 Hz to 10 MHz', async () => {
    const analysis = { ac: { pointsPerDecade: 5, from: 1, to: 1e7 } }
    const { frequency, nodes } = await runAc(toSpice({ ...network, title }, { analysis }))
    expect(frequency.length).toBe(36)
    frequency.forEach((f, k) => {
      const { p, n } = network.output
      const solution = solveAc(network, f, { model: 'real' })
      const judged = nodes[p.toLowerCase()]![k]!
      const other = n === '0' ? { re: 0, im: 0 } : nodes[n.toLowerCase()]![k]!
      const expected = { re: judged.re - other.re, im: judged.im - other.im }
      const difference = Math.hypot(solution.output.re - expected.re, solution.output.im - expected.im)
      const size = Math.hypot(expected.re, expected.im)
      expectClose(difference, 0, { absolute: 1e-9 * size })
    })
  })
})

describe('SPICE text', () => {
  const network = sampleNetworks()['non-inverting, offset up']!

  it('starts with the title, names each element and asks for one analysis at the stated temperature', () => {
    const lines = toSpice(
      { ...network, title: 'Level shift', temperature: 23 },
      { comments: ['span ±1'] },
    ).split('\n')
    expect(lines[0]).toBe('Level shift')
    expect(lines[1]).toBe('* span +/-1')
    for (const { ref } of network.elements) expect(lines.some((line) => line.includes(ref))).toBe(true)
    expect(lines.filter((line) => line.startsWith('.'))).toEqual(['.options temp=23', '.op', '.end'])
  })

  it('writes each value so that it reads back as the same double', () => {
    const values = [1 / 3, 4.7e-12, 1e21, 123456.789, 5e-324, 0.1 + 0.2]
    const bench = new Bench()
    values.forEach((value, k) => bench.r(`R${k}`, 'a', '0', value))
    const text = toSpice(bench.build('a'))
    values.forEach((value, k) => {
      expect(Number(new RegExp(`^R${k} a 0 (.*)$`, 'm').exec(text)?.[1])).toBe(value)
    })
  })

  it('is plain ASCII whatever the title says', () => {
    expect(toSpice({ ...network, title: '10 kΩ × 2 — 25 °C ±1 µV 測' })).toMatch(/^[\n -~]*$/)
  })

  it('is refused by the runner, not answered with the run before, when the netlist is broken', async () => {
    await runOp(toSpice({ ...network, title: 'good' }))
    await expect(runOp('broken\nR1 a 0\nX1 a b nothing\n.op\n.end\n')).rejects.toThrow()
    const again = await runOp(toSpice({ ...network, title: 'good again' }))
    expectClose(again.adc ?? NaN, solveDc(network, { model: 'real' }).output, { absolute: 2.5e-6 })
  }, 60_000)
})
