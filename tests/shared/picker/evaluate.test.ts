import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { evaluateForm, formRefs, idealValues, wantedValue } from '#shared/amplifiers/picker/index.ts'
import { toleranceErrors } from '#shared/amplifiers/picker/tolerance-error.ts'
import { closedForm } from './closed-forms.ts'
import { spreads } from './exhaustive.ts'
import { formMakers, seeded } from './scenarios.ts'

const seeds = fc.integer({ min: 0, max: 2 ** 31 })
const resistance = fc.double({ min: 10, max: 1e7, noNaN: true })

/** A form of the kind with resistors anywhere from 10 Ω to 10 MΩ. */
function anyCircuit(make: (typeof formMakers)[string]) {
  return seeds.chain((seed) => {
    const form = make(seeded(seed))
    const values = fc.record(Object.fromEntries(formRefs(form).map((ref) => [ref, resistance])))
    return values.map((chosen) => ({
      form: form.kind === 'gain-single' ? { ...form, gainMinimum: 0, gainMaximum: Infinity } : form,
      values: chosen as Record<string, number>,
    }))
  })
}

describe.each(Object.keys(formMakers))('%s', (name) => {
  const make = formMakers[name] as (typeof formMakers)[string]

  it('evaluates to gain and offset of its closed form', () => {
    fc.assert(
      fc.property(anyCircuit(make), ({ form, values }) => {
        const { gain, offset } = closedForm(form)(values)
        evaluateForm(form, values).forEach((end, i) => {
          const signal = form.signal[i] as number
          const size =
            Math.abs(gain * signal) +
            Math.abs(offset) +
            Math.abs(gain * ('reference' in form ? form.reference : 0))
          expect(Math.abs(end - (gain * signal + offset))).toBeLessThanOrEqual(1e-12 * size)
        })
      }),
    )
  })

  it('is met again by the values that its design equations ask for', () => {
    fc.assert(
      fc.property(anyCircuit(make), ({ form, values }) => {
        const target = evaluateForm(form, values)
        const span = Math.abs(target[1] - target[0])
        const size = Math.max(...target.map(Math.abs), ...form.signal.map(Math.abs), 5)
        fc.pre(span > 1e-3 * size)
        const ideal = idealValues(form, target, 10_000)
        expect(ideal).not.toBeNull()
        const ends = evaluateForm(form, ideal ?? {})
        // A ratio within 1e-9 of what a link or an open place makes is taken for that.
        ends.forEach((end, i) => expect(Math.abs(end - (target[i] as number))).toBeLessThan(1e-7 * size))
      }),
    )
  })

  it('wants of each single resistor the value that no other value betters', () => {
    fc.assert(
      fc.property(
        anyCircuit(make),
        fc.double({ min: -0.3, max: 0.3, noNaN: true }),
        ({ form, values }, off) => {
          const [low, high] = evaluateForm(form, values)
          const target: [number, number] = [low + off * (high - low), high + off * off * (high - low)]
          const missOf = (chosen: Record<string, number>): number => {
            const ends = evaluateForm(form, chosen)
            return Math.max(...ends.map((end, i) => Math.abs(end - (target[i] as number))))
          }
          const size = Math.max(Math.abs(low), Math.abs(high), 5)
          for (const ref of formRefs(form)) {
            const wanted = wantedValue(form, target, values, ref)
            const sweep = Array.from({ length: 121 }, (_, i) => 10 ** (-2 + i / 12))
            const misses = sweep.map((value) => missOf({ ...values, [ref]: value }))
            const least = Math.min(...misses)
            if (wanted !== null && wanted > 0.1 && wanted < 1e9)
              expect(missOf({ ...values, [ref]: wanted })).toBeLessThanOrEqual(least + 1e-9 * size)
            // Without a value of its own the best is at an edge of the sweep: a link or an open place.
            if (wanted === null)
              expect(Math.min(misses[0] as number, misses.at(-1) as number)).toBeLessThanOrEqual(
                least + 1e-9 * size,
              )
          }
        },
      ),
      { numRuns: 100 },
    )
  })

  it('adds up what tolerances do to the ends as central differences do', () => {
    fc.assert(
      fc.property(anyCircuit(make), ({ form, values }) => {
        const tolerance = Object.fromEntries(formRefs(form).map((ref, i) => [ref, 0.001 * (i + 1)]))
        const request = { form, target: [0, 1] as [number, number], lists: {}, tolerance, preferred: 1e4 }
        const wanted = spreads(request, values)
        const size = Math.max(...evaluateForm(form, values).map(Math.abs), 5)
        toleranceErrors(form, values, tolerance).forEach((spread, i) =>
          expect(Math.abs(spread - (wanted[i] as number))).toBeLessThan(1e-8 * size),
        )
      }),
    )
  })
})

describe('design equations', () => {
  it('give the textbook values of a gain of 10 with 10 kΩ in the middle', () => {
    const ideal = idealValues({ kind: 'non-inverting', signal: [0, 0.25] }, [0, 2.5], 10_000)
    expect(ideal?.['Rf']).toBeCloseTo(30_000, 6)
    expect(ideal?.['Rg']).toBeCloseTo(10_000 / 3, 6)
  })

  it('leave out what a follower does not need', () => {
    expect(idealValues({ kind: 'non-inverting', signal: [0, 2.5] }, [0, 2.5], 10_000)).toEqual({ Rf: 0 })
    expect(idealValues({ kind: 'attenuator', signal: [0, 2.5] }, [0, 2.5], 10_000)).toEqual({ R1: 0 })
  })

  it('take the source resistance out of the resistor that it stands in series with', () => {
    const form = { kind: 'inverting', signal: [0, 1], source: 1000 } as const
    const ideal = idealValues({ ...form, signal: [0, 1] }, [0, -2], 10_000) as Record<string, number>
    expect((ideal['Rf'] as number) / ((ideal['Rg'] as number) + 1000)).toBeCloseTo(2, 12)
    expect((ideal['Rf'] as number) * (ideal['Rg'] as number)).toBeCloseTo(1e8, 3)
  })

  it.each([
    ['an attenuator cannot amplify', { kind: 'attenuator', signal: [0, 1] }, [0, 2]],
    ['a non-inverting amplifier cannot attenuate', { kind: 'non-inverting', signal: [0, 2] }, [0, 1]],
    ['an offset up cannot be down', { kind: 'non-inverting-up', signal: [0, 1], reference: 2.5 }, [-1, 1]],
    ['a level shift cannot amplify', { kind: 'level-shift', signal: [-0.1, 0.1], reference: 2.5 }, [0, 2.5]],
    ['an inverting stage turns the sense', { kind: 'inverting', signal: [0, 1] }, [0, 2]],
    [
      'a weighted difference cannot push up',
      { kind: 'weighted-difference', signal: [0, 1], reference: 2.5 },
      [1, 2],
    ],
  ] as const)('know that %s', (_, form, target) => {
    expect(idealValues({ ...form, signal: [...form.signal] }, [...target], 10_000)).toBeNull()
  })
})

describe('wanted value', () => {
  it('is Rf = Rg·(G − 1) for a non-inverting amplifier', () => {
    const form = { kind: 'non-inverting', signal: [0, 0.25] } as const
    const wanted = wantedValue({ ...form, signal: [0, 0.25] }, [0, 2.5], { Rf: 91_000, Rg: 10_200 }, 'Rf')
    expect(wanted).toBeCloseTo(91_800, 6)
  })

  it('is null for a resistor whose effect is nil, and where only a negative one would do', () => {
    const form = { kind: 'non-inverting', signal: [0, 2] } as const
    expect(wantedValue({ ...form, signal: [0, 2] }, [0, 1], { Rf: 1000, Rg: 1000 }, 'Rf')).toBeNull()
    expect(wantedValue({ ...form, signal: [0, 2] }, [0, 1], { Rf: 0, Rg: 1000 }, 'Rg')).toBeNull()
  })

  it('is found for a resistor that is open or a link at present', () => {
    const form = { kind: 'non-inverting', signal: [0, 1] } as const
    expect(wantedValue({ ...form, signal: [0, 1] }, [0, 2], { Rf: 10_000 }, 'Rg')).toBeCloseTo(10_000, 6)
    expect(wantedValue({ ...form, signal: [0, 1] }, [0, 2], { Rf: 0, Rg: 4700 }, 'Rf')).toBeCloseTo(4700, 6)
  })
})
