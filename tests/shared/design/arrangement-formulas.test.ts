import { afterAll, describe, expect, it } from 'vitest'
import { arrangements } from '#shared/amplifiers/index.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Candidate, Plan } from '#shared/design/plan.ts'
import { readDesign } from '#shared/design/read.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import { closedForm, type Surroundings } from '#tests/support/closed-forms.ts'
import { arrangementDesigns, withExactResistors } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runOp } from '#tests/support/ngspice.ts'

/*
 * One network serves every analysis, so a wrong connection or value would be wrong everywhere alike. Two judges that
 * share nothing with it: node equations written by hand, and ngspice on the netlist as printed.
 */

const worst = { formula: 0, ngspice: 0 }

afterAll(() => {
  console.info(
    `worst difference over all arrangements: closed form ${worst.formula.toExponential(1)} of the figure, ` +
      `ngspice ${worst.ngspice.toExponential(1)} of the span`,
  )
})

it('has a design for every arrangement in the list', () => {
  const known = arrangementDesigns.map(([id]) => id)
  expect(arrangements.map((a) => a.id).filter((id) => !known.includes(id))).toEqual([])
})

describe.each(arrangementDesigns)('%s', (id, document) => {
  const given = withExactResistors(document)
  const design = parsed(given)
  const plan = planDesign(given)
  const candidate = chosenOf(plan)

  it('is chosen when asked for, and feasible', () => {
    expect(candidate.arrangement).toBe(id)
    expect(candidate.reasons).toEqual([])
    expect(candidate.feasible).toBe(true)
  })

  it('reaches the ends that its node equations give, within a billionth', () => {
    for (const end of ['low', 'high'] as const) {
      const expected = handCalculated(design, candidate, end)
      const actual = candidate.realised!.ideal[end]
      worst.formula = Math.max(worst.formula, Math.abs(actual - expected) / Math.abs(expected))
      expectClose(actual, expected, { relative: 1e-9 })
    }
  })

  it('lands on its target but for the error told of its pick', () => {
    const { low, high } = candidate.target!
    const pick = candidate.picks?.[candidate.pick ?? 0]
    const { ideal } = candidate.realised!
    // The converter's own resistance takes its share after the pick.
    const share =
      2e7 / (2e7 + candidate.filter!.resistance + (id === 'direct' ? design.sensor.sourceResistance : 0))
    if (!pick) return expectClose(ideal.high - ideal.low, 2 * share, { relative: 1e-9 })
    expectClose(ideal.low, pick.ends.low * share, { absolute: 1e-9 * (high - low) })
    expectClose(ideal.high, pick.ends.high * share, { absolute: 1e-9 * (high - low) })
    expect(pick.error).toBeLessThan(0.02)
  })

  it('has the operating points of ngspice at both ends within a millionth of the span', async () => {
    const { low, high } = candidate.realised!.converter
    const netlist = candidate.netlist!
    const judged = { low: await runOp(netlist), high: await runOp(atHighEnd(netlist)) }
    for (const end of ['low', 'high'] as const) {
      const difference = (candidate.realised!.converter[end] - (judged[end].adc ?? NaN)) / (high - low)
      worst.ngspice = Math.max(worst.ngspice, Math.abs(difference))
      expectClose(difference, 0, { absolute: 1e-6 })
    }
  })
})

function chosenOf(plan: Plan): Candidate {
  const candidate = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  if (!candidate) throw new Error('nothing was chosen')
  return candidate
}

function parsed(document: DesignDocument): Design {
  const read = readDesign(document)
  if (!read.ok) throw new Error(read.faults.map((f) => `${f.path}: ${f.reason}`).join('\n'))
  return read.design
}

/** y at one end by hand: the stages one after the other, then the filter's resistor against the converter's input. */
function handCalculated(design: Design, candidate: Candidate, end: 'low' | 'high'): number {
  const { sensor, converter, shiftReference, parts } = design
  if (sensor.kind !== 'voltage') throw new Error('the designs here have a voltage output')
  const reference = shiftReference ?? converter.reference
  const around: Surroundings = {
    signal: sensor.output[end],
    commonMode: ((sensor.commonMode?.low ?? 0) + (sensor.commonMode?.high ?? 0)) / 2,
    source: sensor.sourceResistance,
    reference: reference?.voltage ?? 0,
    referenceResistance: reference?.outputResistance ?? 0,
    k: parts.instrumentation.k,
  }
  const [first = '', second] = candidate.arrangement.split('+')
  let u = closedForm(first, valuesOf(candidate, ''), around)
  if (second !== undefined)
    u = closedForm(second, valuesOf(candidate, 'B'), { ...around, signal: u, source: 0 })
  const inSeries = candidate.filter!.resistance + (first === 'direct' ? sensor.sourceResistance : 0)
  return (u * converter.inputResistance) / (converter.inputResistance + inSeries)
}

/** Values in the parts list by the arrangement's own designators. */
function valuesOf(candidate: Candidate, suffix: string): Record<string, number> {
  return Object.fromEntries(
    candidate.components!.flatMap((c) => {
      const own = suffix === '' ? /^R[1-8fgs]$/.exec(c.ref) : new RegExp(`^(R[1-8fgs])${suffix}$`).exec(c.ref)
      return own && c.value !== undefined ? [[own[1] ?? c.ref, c.value]] : []
    }),
  )
}

/** The netlist with the values that its comments give for the other end. */
function atHighEnd(netlist: string): string {
  const lines = netlist.split('\n')
  const start = lines.findIndex((line) => /^\* At .*:$/.test(line))
  const changes = lines.slice(start + 1).flatMap((line) => [.../^\* (\w+) = (\S+)$/g[Symbol.matchAll](line)])
  expect(changes.length).toBeGreaterThan(0)
  return lines
    .map((line) => {
      const change = changes.find(([, ref]) => line.startsWith(`${ref} `))
      return change ? line.replace(/(DC )?\S+( AC 1)?$/, `$1${change[2]}$2`) : line
    })
    .join('\n')
}
