import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { openSimulator } from '#server/lib/simulator.ts'
import { planDesign, prepareCandidate, type Prepared } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { NetworkBuilder } from '#shared/network/builder.ts'
import { compareFigures } from '#shared/studies/check-line.ts'
import { integrate, printNoise } from '#shared/studies/check-noise.ts'
import { checkRuns, runCheck } from '#shared/studies/check.ts'
import { buildAmplifierPart } from '#tests/support/amplifier-part.ts'
import { buildDesign } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { root } from '#tests/support/source-imports.ts'

const simulator = openSimulator()
const folder = join(root, 'docs/examples')
const examples = readdirSync(folder).filter((name) => name.endsWith('.json'))

function prepare(name: string): Prepared {
  const document = JSON.parse(readFileSync(join(folder, name), 'utf8')) as DesignDocument
  const plan = planDesign(document)
  const candidate = plan.candidates[plan.chosen ?? -1]
  const prepared = candidate && prepareCandidate(document, candidate)
  if (!prepared) throw new Error(`${name} has no candidate`)
  return prepared
}

describe.each(examples)('the independent check of docs/examples/%s', (name) => {
  const prepared = prepare(name)

  it('agrees at both ends and in the middle, at the bandwidth, at the corner and in noise', async () => {
    const steps: number[] = []
    const check = await runCheck(prepared, simulator, (done) => steps.push(done))
    const runs = checkRuns(prepared)
    expect(steps).toEqual([...runs.keys(), runs.length])
    expect(check.lines.filter((line) => !line.ok)).toEqual([])
    expect(check.ok).toBe(true)
    const what = check.lines.map((line) => line.what).join('\n')
    for (const part of ['low end', 'middle', 'high end']) expect(what).toContain(`Operating point, ${part}`)
    if (prepared.design.sensor.bandwidth !== undefined) expect(what).toContain('signal bandwidth')
    if (prepared.candidate.filter?.kind !== 'none') expect(what).toContain('filter corner')
    expect(what).toContain('Noise of resistors and amplifiers')
  })

  it('runs the low end from the very netlist that the plan prints', () => {
    expect(checkRuns(prepared)[0]?.netlist).toBe(prepared.candidate.netlist)
  })
})

describe('a figure of ours that is wrong', () => {
  const prepared = prepare('flow-velocity.json')

  it('is found: a plan whose netlist has one resistor a hundredth off fails at the low end', async () => {
    const netlist = prepared.candidate.netlist ?? ''
    const changed = netlist.replace(/^(R1 \S+ \S+) (\S+)$/m, (_, head: string, value: string) => {
      return `${head} ${Number(value) * 1.01}`
    })
    expect(changed).not.toBe(netlist)
    const candidate = { ...prepared.candidate, netlist: changed }
    const check = await runCheck({ ...prepared, candidate }, simulator)
    expect(check.ok).toBe(false)
    expect(check.lines.filter((line) => !line.ok).every((line) => line.what.includes('low end'))).toBe(true)
  })

  it('is not let through where one side is not a number', () => {
    expect(compareFigures('x', 'V', [NaN, 1], 1).ok).toBe(false)
    expect(compareFigures('x', 'V', [1, NaN], 1).ok).toBe(false)
    expect(compareFigures('x', 'V', [1, 1.5], 0.4).ok).toBe(false)
    expect(compareFigures('x', 'V', [1, 1.5], 0.5).ok).toBe(true)
  })
})

describe('noise in SPICE text', () => {
  /** Gain of 1 + R2/R1 = 10 with noise of its own; its loop far above what is looked at. */
  const part = buildAmplifierPart({
    gbw: 1e9,
    a0: 1e9,
    rin: 1e12,
    rcm: 1e12,
    cin: { common: 0, differential: 0 },
    en: 5e-9,
    enCorner: 30,
    in: 2e-12,
    inCorner: 400,
  })
  const network = new NetworkBuilder()
    .voltageSource({ ref: 'V1', p: 'in', n: '0', value: 0, ac: 1, stage: 'source' })
    .voltageSource({ ref: 'VPOS', p: 'vpos', n: '0', value: 5, stage: 'supply' })
    .voltageSource({ ref: 'VNEG', p: 'vneg', n: '0', value: -5, stage: 'supply' })
    .resistor({ ref: 'RS', a: 'in', b: 'p', value: 2000, stage: 'source' })
    .resistor({ ref: 'R1', a: 'm', b: '0', value: 1000, stage: 'S1' })
    .resistor({ ref: 'R2', a: 'out', b: 'm', value: 9000, stage: 'S1' })
    .amplifier({ ref: 'U1', p: 'p', m: 'm', out: 'out', vpos: 'vpos', vneg: 'vneg', part, stage: 'S1' })
    .build({ title: 'Noise by hand', output: { p: 'out', n: '0' }, temperature: 25 })

  it('has the density that the sources give by hand, with 1/f, at 1 Hz, 30 Hz and 1 kHz', async () => {
    const temperature = 300
    const { frequency, density } = await simulator.runNoise(
      printNoise(network, { from: 1, to: 1000, temperature, input: 'V1' }),
    )
    const thermal = (ohms: number) => 4 * 1.380649e-23 * temperature * ohms
    for (const [at, f] of frequency.entries()) {
      const en = 5e-9 ** 2 * (1 + 30 / f)
      const current = 2e-12 ** 2 * (1 + 400 / f)
      const square =
        100 * (en + thermal(2000) + current * 2000 ** 2) +
        81 * thermal(1000) +
        thermal(9000) +
        current * 9000 ** 2
      expectClose(density[at] ?? NaN, Math.sqrt(square), { relative: 1e-5 })
    }
    expect(frequency.length).toBe(181)
  })
})

describe('a converter with a digital filter', () => {
  it('is compared before it, on both sides alike', async () => {
    const base = buildDesign()
    const document = buildDesign({
      converter: {
        ...base.converter,
        architecture: 'oversampling',
        modulatorRate: 64_000,
        outputRate: 500,
        digitalFilter: 'sinc3',
      },
    })
    const candidate = planDesign(document).candidates[0]
    const prepared = candidate && prepareCandidate(document, candidate)
    expect(prepared?.candidate).toBe(candidate)
    if (!prepared) return
    const check = await runCheck(prepared, simulator)
    expect(check.lines.filter((line) => !line.ok)).toEqual([])
    expect(check.lines.at(-1)?.what).toContain('before the digital filter')
  })
})

describe('the integral of a noise density', () => {
  const grid = Array.from({ length: 61 }, (_, i) => 10 ** (-1 + i / 10))

  it('is exact for white, 1/f and 1/f² noise', () => {
    const [from, to] = [0.1, 1e5]
    const white = grid.map(() => 3e-9)
    expectClose(integrate(grid, white), 3e-9 * Math.sqrt(to - from), { relative: 1e-12 })
    const flicker = grid.map((f) => 3e-9 / Math.sqrt(f))
    expectClose(integrate(grid, flicker), 3e-9 * Math.sqrt(Math.log(to / from)), { relative: 1e-12 })
    const brown = grid.map((f) => 3e-9 / f)
    expectClose(integrate(grid, brown), 3e-9 * Math.sqrt(1 / from - 1 / to), { relative: 1e-12 })
  })

  it('is within 0.01 % for a resistor with a capacitor across it: kT/C', async () => {
    const netlist = [
      'kT/C',
      'V1 in 0 DC 0 AC 1',
      'R1 in out 10000',
      'C1 out 0 1e-9',
      '.options temp=60',
      '.noise v(out) V1 dec 60 0.1 1e10',
      '.end',
    ].join('\n')
    const { frequency, density } = await simulator.runNoise(netlist)
    const expected = Math.sqrt((1.380649e-23 * (60 + 273.15)) / 1e-9)
    expectClose(integrate(frequency, density), expected, { relative: 1e-4 })
  })
})
