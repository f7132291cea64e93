import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { solveDc } from '#shared/analysis/dc.ts'
import type { ExtremesOutput, ExtremesRequest, SourceVariable } from '#shared/analysis/extremes.ts'
import { computeExtremes } from '#shared/analysis/extremes.ts'
import type { Injection } from '#shared/analysis/system.ts'
import { CircuitError } from '#shared/network/circuit-error.ts'
import type { Network } from '#shared/network/types.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const samples = sampleNetworks()
const chosen = [
  'divider',
  'non-inverting, offset up',
  'non-inverting, offset down',
  'inverting, offset up',
  'difference',
  'loop shunt',
  'differential output',
] as const

/** Every resistor boxed, every source and offset a variable, an output of each kind. */
function requestFor(network: Network, relative: number, model: 'ideal' | 'real'): ExtremesRequest {
  const variables: SourceVariable[] = network.elements.flatMap((element): SourceVariable[] => {
    const base = { nominal: 0 }
    if (element.kind === 'voltage-source' || element.kind === 'current-source') {
      const half = Math.abs(element.value) * 0.05
      const middle = element.value + half / 3
      const injections = [{ ref: element.ref, port: 'value' as const, scale: 1 }]
      return [
        { id: element.ref, nominal: element.value, low: middle - half, high: middle + half, injections },
      ]
    }
    if (element.kind !== 'amplifier') return []
    const both = [
      { ref: element.ref, port: 'ib+' as const, scale: 1 },
      { ref: element.ref, port: 'ib-' as const, scale: 1 },
    ]
    return [
      {
        ...base,
        id: `${element.ref}.vos`,
        low: -1e-3,
        high: 1e-3,
        injections: [{ ref: element.ref, port: 'vos', scale: 1 }],
      },
      { ...base, id: `${element.ref}.ib`, low: -1e-9, high: 3e-9, injections: both },
    ]
  })
  const amplifiers = network.elements.filter(({ kind }) => kind === 'amplifier').map(({ ref }) => ref)
  const sensed = variables[0]!
  const outputs: ExtremesOutput[] = [
    { id: 'y', nodes: { [network.output.p]: 1, [network.output.n]: -1 } },
    { id: 'margin', nodes: { [network.output.p]: -1 }, variables: { [sensed.id]: 1 }, constant: 4 },
    ...amplifiers.map((ref) => ({ id: `i ${ref}`, nodes: {}, currents: { [ref]: 1 } })),
  ]
  return {
    model,
    resistors: network.elements
      .filter(({ kind }) => kind === 'resistor')
      .map(({ ref }) => ({ ref, relative })),
    variables,
    cmrr: [],
    outputs,
    cases: [
      { id: 'free', pinned: {} },
      { id: 'low', pinned: { [sensed.id]: sensed.low } },
      { id: 'beyond', pinned: { [sensed.id]: 2 * sensed.high - sensed.low } },
    ],
  }
}

/** One board by direct solution: resistor factors, and a place −1…1 in the range of each variable. */
function board(
  network: Network,
  request: ExtremesRequest,
  pinned: Record<string, number>,
  factors: number[],
  places: number[],
  x: number[] = [],
) {
  const values: Record<string, number> = {}
  const extra: Injection[] = []
  request.variables.forEach((variable, k) => {
    const middle = (variable.low + variable.high) / 2
    values[variable.id] = pinned[variable.id] ?? middle + (places[k]! * (variable.high - variable.low)) / 2
    for (const { ref, port, scale } of variable.injections) {
      extra.push({ ref, port, amount: (values[variable.id]! - variable.nominal) * scale })
    }
  })
  request.cmrr.forEach(({ ref, reference }, k) =>
    extra.push({ ref, port: 'cmrr', amount: x[k] ?? 0, reference }),
  )
  const set = Object.fromEntries(
    request.resistors.map(({ ref, relative }, k) => {
      const element = network.elements.find((candidate) => candidate.ref === ref)!
      return [ref, 'value' in element ? element.value * (1 + factors[k]! * relative) : NaN]
    }),
  )
  const solution = solveDc(network, { model: request.model, set, extra })
  return request.outputs.map((output) => {
    const terms = [
      ...Object.entries(output.nodes).map(([node, weight]) => weight * solution.voltage(node)),
      ...Object.entries(output.currents ?? {}).map(([ref, weight]) => weight * solution.current(ref)),
      ...Object.entries(output.variables ?? {}).map(([id, weight]) => weight * values[id]!),
    ]
    return terms.reduce((sum, term) => sum + term, output.constant ?? 0)
  })
}

const corner = (bits: number, count: number) =>
  Array.from({ length: count }, (_, k) => ((bits >> k) & 1 ? 1 : -1))

describe.each(chosen)('extremes of %s', (title) => {
  const network = samples[title]!

  it.each(['ideal', 'real'] as const)(
    'equal direct solutions of every vertex and every corner of the sources, %s',
    (model) => {
      const request = requestFor(network, 0.01, model)
      const found = computeExtremes(network, request)
      expect(found).toMatchObject({ proven: true, keepsSign: true })
      for (const held of request.cases) {
        const low = request.outputs.map(() => Infinity)
        const high = request.outputs.map(() => -Infinity)
        const count = request.variables.length
        // at one vertex of the resistors the outputs are linear in the sources: one solution each gives their slopes
        for (let vertex = 0; vertex < 2 ** request.resistors.length; vertex++) {
          const factors = corner(vertex, request.resistors.length)
          const zero = Array<number>(count).fill(0)
          const middle = board(network, request, held.pinned, factors, zero)
          const half = request.outputs.map(() => 0)
          for (let k = 0; k < count; k++) {
            const moved = board(network, request, held.pinned, factors, zero.with(k, 1))
            moved.forEach((value, o) => (half[o]! += Math.abs(value - middle[o]!)))
          }
          middle.forEach((value, o) => {
            low[o] = Math.min(low[o]!, value - half[o]!)
            high[o] = Math.max(high[o]!, value + half[o]!)
          })
        }
        const nominal = board(
          network,
          request,
          nominalPins(request, held.pinned),
          request.resistors.map(() => 0),
          [],
        )
        request.outputs.forEach(({ id }, o) => {
          const entry = found.outputs[id]![held.id]!
          // never narrower, and wider only by what resistors of slight effect are allowed for
          expect(entry.low).toBeLessThanOrEqual(low[o]! + 1e-12)
          expect(entry.high).toBeGreaterThanOrEqual(high[o]! - 1e-12)
          expectClose(entry.low, low[o]!, { absolute: 2e-9 })
          expectClose(entry.high, high[o]!, { absolute: 2e-9 })
          expectClose(entry.nominal, nominal[o]!, { absolute: 1e-12 })
        })
      }
    },
  )

  it.each(['ideal', 'real'] as const)('hold for any board drawn inside the limits, %s', (model) => {
    const part = fc.double({ min: -1, max: 1, noNaN: true })
    const draw = fc.array(part, { minLength: 20, maxLength: 20 })
    const tolerance = fc.constantFrom(1e-3, 0.01, 0.05)
    const found = new Map<number, ReturnType<typeof computeExtremes>>()
    fc.assert(
      fc.property(draw, draw, draw, tolerance, (factors, places, rejection, relative) => {
        const request = withRejection(network, requestFor(network, relative, model), 1e-3)
        const known = found.get(relative) ?? computeExtremes(network, request)
        found.set(relative, known)
        const x = request.cmrr.map((entry, k) => entry.x * rejection[k]!)
        for (const held of request.cases) {
          board(network, request, held.pinned, factors, places, x).forEach((value, o) => {
            const { low, high } = known.outputs[request.outputs[o]!.id]![held.id]!
            // the common-mode error's effect on itself is of second order in x
            const allowance = 1e-12 + 2e-3 * ((high - low) / 2)
            expect(value).toBeGreaterThanOrEqual(low - allowance)
            expect(value).toBeLessThanOrEqual(high + allowance)
          })
        }
      }),
      { numRuns: 150 },
    )
  })
})

/** All variables pinned at nominal, except those that the case pins. */
const nominalPins = (request: ExtremesRequest, pinned: Record<string, number>) => ({
  ...Object.fromEntries(request.variables.map(({ id, nominal }) => [id, nominal])),
  ...pinned,
})

function withRejection(network: Network, request: ExtremesRequest, x: number): ExtremesRequest {
  const amplifiers = network.elements.filter(({ kind }) => kind === 'amplifier')
  return { ...request, cmrr: amplifiers.map(({ ref }) => ({ ref, x, reference: 0.7 })) }
}

describe('common-mode error in the extremes', () => {
  it('widens a follower by x times the largest distance from the reference', () => {
    const network = new Bench().v('VSENSE', 'sense', 1).u('U1', 'sense', 'adc', 'adc').build()
    const found = computeExtremes(network, {
      model: 'ideal',
      resistors: [],
      variables: [
        { id: 's', nominal: 1, low: 0, high: 3, injections: [{ ref: 'VSENSE', port: 'value', scale: 1 }] },
      ],
      cmrr: [{ ref: 'U1', x: 1e-3, reference: 2.5 }],
      outputs: [{ id: 'y', nodes: { adc: 1 } }],
      cases: [
        { id: 'free', pinned: {} },
        { id: 'held', pinned: { s: 1 } },
      ],
    })
    expectClose(found.outputs.y!.free!.low, -2.5e-3, { absolute: 1e-12 })
    expectClose(found.outputs.y!.free!.high, 3 + 2.5e-3, { absolute: 1e-12 })
    expectClose(found.outputs.y!.held!.high, 1 + 1.5e-3, { absolute: 1e-12 })
  })
})

describe('clip points', () => {
  const network = samples['non-inverting, offset up']!
  const build = (limit: number, x = 0): ExtremesRequest => ({
    model: 'ideal',
    resistors: ['R1', 'R2', 'RG', 'RF'].map((ref) => ({ ref, relative: 0.01 })),
    variables: [
      {
        id: 'signal',
        nominal: 0.5,
        low: 0,
        high: 1,
        injections: [{ ref: 'VSENSE', port: 'value', scale: 1 }],
      },
      {
        id: 'vref',
        nominal: 2.5,
        low: 2.45,
        high: 2.55,
        injections: [{ ref: 'VREF', port: 'value', scale: 1 }],
      },
    ],
    cmrr: x === 0 ? [] : [{ ref: 'U1', x, reference: 0.4 }],
    outputs: [
      { id: 'upper', nodes: { adc: -1 }, constant: limit },
      { id: 'lower', nodes: { adc: 1 }, constant: -0.2 },
      { id: 'reference', nodes: { vref: -1 }, constant: 3 },
      { id: 'hopeless', nodes: { vref: -1 }, constant: 2.5 },
    ],
    cases: [
      { id: 'low', pinned: { signal: 0 } },
      { id: 'high', pinned: { signal: 1 } },
    ],
    clip: { variable: 'signal' },
  })

  it.each([0, 1e-3])('are where the worst margin becomes zero, with a common-mode error of %s', (x) => {
    const request = build(3.2, x)
    const { outputs } = computeExtremes(network, request)
    for (const [id, end] of [
      ['upper', 'high'],
      ['lower', 'low'],
    ] as const) {
      const at = outputs[id]!.low!.clip![end]!
      // the same point from wherever it is looked for
      expectClose(outputs[id]!.high!.clip![end]!, at, { absolute: 1e-10 })
      const again = computeExtremes(network, { ...request, cases: [{ id: 'there', pinned: { signal: at } }] })
      expectClose(again.outputs[id]!.there!.low, 0, { absolute: 1e-10 })
      expect(outputs[id]!.low!.clip!.empty).toBe(false)
      const nominal = outputs[id]!.low!.nominalClip![end]!
      expectClose(
        board(network, request, { signal: nominal, vref: 2.5 }, [0, 0, 0, 0], [])[id === 'upper' ? 0 : 1]!,
        0,
        { absolute: 1e-10 },
      )
      expect(end === 'high' ? nominal > at : nominal < at).toBe(true)
    }
  })

  it('are null on the side on which a margin only grows, and for a margin that the signal does not move', () => {
    const { outputs } = computeExtremes(network, build(3.2))
    expect(outputs.upper!.low!.clip!.low).toBeNull()
    expect(outputs.lower!.low!.clip!.high).toBeNull()
    expect(outputs.reference!.low!.clip).toEqual({ low: null, high: null, empty: false })
    expect(outputs.reference!.low!.nominalClip).toEqual({ low: null, high: null, empty: false })
  })

  it('depend on what else a case holds', () => {
    const cases = [2.45, 2.55].map((vref) => ({ id: String(vref), pinned: { signal: 0, vref } }))
    const { upper } = computeExtremes(network, { ...build(3.2), cases }).outputs
    const [low, high] = [upper!['2.45']!.clip!.high!, upper!['2.55']!.clip!.high!]
    // 0.1 V of reference moves the clip point by 0.1 V times R1/R2, and 1 % parts change that by up to 4 %
    expectClose(low - high, 0.1 / 18, { relative: 0.04 })
  })

  it('say that there is none where a margin is missed at every signal', () => {
    const entry = computeExtremes(network, build(3.2)).outputs.hopeless!.low!
    expect(entry.clip!.empty).toBe(true)
    expect(entry.nominalClip).toEqual({ low: null, high: null, empty: false })
  })

  it('are found beyond the held signal where the margin is missed there already', () => {
    const { outputs } = computeExtremes(network, build(0.1))
    const { high, empty } = outputs.upper!.high!.clip!
    expect(high).toBeLessThan(0)
    expect(empty).toBe(false)
  })
})

describe('the walk over the vertices', () => {
  const ladder = (count: number): Network => {
    const bench = new Bench().v('VSENSE', 'n0', 1)
    for (let k = 0; k < count; k++)
      bench.r(`R${k}`, `n${k}`, `n${k + 1}`, 1e3 + 100 * k).r(`RG${k}`, `n${k + 1}`, '0', 5e3)
    return bench.build(`n${count}`)
  }
  const requestLadder = (network: Network, relative: number): ExtremesRequest => ({
    model: 'ideal',
    resistors: network.elements
      .filter(({ kind }) => kind === 'resistor')
      .map(({ ref }) => ({ ref, relative })),
    variables: [],
    cmrr: [],
    outputs: [{ id: 'y', nodes: { [network.output.p]: 1 } }],
    cases: [{ id: 'only', pinned: {} }],
  })

  it('keeps 1e-12 V over many refreshes: 12 resistors, 4096 vertices', () => {
    const network = ladder(6)
    const found = computeExtremes(network, requestLadder(network, 0.05))
    expect(found).toMatchObject({ vertices: 4096, resistors: 12, proven: true, keepsSign: true })
    // all series resistors large and all others small is the lowest board of a ladder
    const extreme = (series: number) =>
      solveDc(network, {
        model: 'ideal',
        set: Object.fromEntries(
          network.elements
            .filter((element) => element.kind === 'resistor')
            .map(({ ref, value }) => [ref, value * (ref.startsWith('RG') ? 1 - series : 1 + series)]),
        ),
      }).output
    expectClose(found.outputs.y!.only!.low, extreme(0.05), { absolute: 1e-12 })
    expectClose(found.outputs.y!.only!.high, extreme(-0.05), { absolute: 1e-12 })
  })

  it('climbs above 20 resistors and says that the bound is not proven', () => {
    const network = ladder(11)
    const found = computeExtremes(network, requestLadder(network, 0.02))
    expect(found.proven).toBe(false)
    expect(found.resistors).toBe(22)
    const [low, high] = [-1, 1].map(
      (side) =>
        solveDc(network, {
          model: 'ideal',
          set: Object.fromEntries(
            network.elements
              .filter((element) => element.kind === 'resistor')
              .map(({ ref, value }) => [ref, value * (1 + 0.02 * side * (ref.startsWith('RG') ? 1 : -1))]),
          ),
        }).output,
    )
    expectClose(found.outputs.y!.only!.low, low!, { absolute: 1e-12 })
    expectClose(found.outputs.y!.only!.high, high!, { absolute: 1e-12 })
  })

  it('leaves out resistors that an output cannot feel: behind an ideal amplifier, across a source', () => {
    const network = new Bench()
      .v('VSENSE', 'sense', 1)
      .r('R9', 'sense', '0', 1e3)
      .r('R1', 'sense', 'p', 1e4)
      .r('R2', 'p', '0', 1e4)
      .u('U1', 'p', 'o1', 'o1')
      .r('R3', 'o1', 'adc', 1e4)
      .r('R4', 'adc', '0', 1e4)
      .build()
    const request: ExtremesRequest = {
      ...requestLadder(network, 0.01),
      outputs: [
        { id: 'first', nodes: { o1: 1 } },
        { id: 'last', nodes: { adc: 1 } },
        { id: 'load', nodes: {}, currents: { VSENSE: 1 } },
      ],
    }
    const found = computeExtremes(network, request)
    expect(found.resistors).toBe(5)
    const without = computeExtremes(network, { ...request, outputs: request.outputs.slice(0, 2) })
    expect(without.resistors).toBe(4)
    expectClose(found.outputs.load!.only!.high, -(1 / 1010 + 1 / 20200), { absolute: 1e-12 })
  })

  it('sees a matched pair whose resistors have no effect at nominal', () => {
    // the common mode of a difference amplifier: zero at nominal, a product of deviations elsewhere
    const network = new Bench()
      .v('VCM', 'cm', 10)
      .r('R1', 'cm', 'm', 1e4)
      .r('R2', 'm', 'adc', 1e4)
      .r('R3', 'cm', 'p', 1e4)
      .r('R4', 'p', '0', 1e4)
      .u('U1', 'p', 'm', 'adc')
      .build()
    const { outputs } = computeExtremes(network, requestLadder(network, 0.01))
    expectClose(outputs.y!.only!.nominal, 0, { absolute: 1e-12 })
    const directly = (side: number) =>
      solveDc(network, {
        model: 'ideal',
        set: { R1: 1e4 * (1 - side), R2: 1e4 * (1 + side), R3: 1e4 * (1 + side), R4: 1e4 * (1 - side) },
      }).output
    expectClose(outputs.y!.only!.low, directly(0.01), { absolute: 1e-12 })
    expectClose(outputs.y!.only!.high, directly(-0.01), { absolute: 1e-12 })
  })

  it.each([
    [1e5, true],
    [1e6, false],
  ])(
    'a balanced current source of 1 %% parts into %s Ω keeps the sign of its determinant: %s',
    (load, keepsSign) => {
      const network = new Bench()
        .v('VSENSE', 'sense', 1)
        .r('R1', 'm', '0', 1e4)
        .r('R2', 'out', 'm', 1e4)
        .r('R3', 'sense', 'adc', 1e4)
        .r('R4', 'out', 'adc', 1e4)
        .u('U1', 'adc', 'm', 'out')
        .r('RL', 'adc', '0', load)
        .build()
      const request = {
        ...requestLadder(network, 0.01),
        resistors: ['R1', 'R2', 'R3', 'R4'].map((ref) => ({ ref, relative: 0.01 })),
      }
      const found = computeExtremes(network, request)
      expect(found.keepsSign).toBe(keepsSign)
      const { low, high, nominal } = found.outputs.y!.only!
      expect([low, high, nominal].every(Number.isFinite)).toBe(true)
    },
  )

  it('takes no tolerance at all: one vertex, low = high', () => {
    const found = computeExtremes(samples.divider!, { ...requestLadder(samples.divider!, 0), variables: [] })
    expect(found).toMatchObject({ vertices: 1, resistors: 0 })
    expect(found.outputs).toHaveProperty('y')
    expect(found.outputs.y!.only!.low).toBe(found.outputs.y!.only!.high)
  })
})

describe('a request that cannot be answered', () => {
  const network = samples.divider!
  const request = requestFor(network, 0.01, 'ideal')

  it.each<[string, Partial<ExtremesRequest>, string]>([
    [
      'a pinned variable that is not there',
      { cases: [{ id: 'a', pinned: { nothing: 1 } }] },
      'no variable nothing',
    ],
    ['a clip variable that is not there', { clip: { variable: 'nothing' } }, 'no variable nothing'],
    ['an amplifier that is not there', { cmrr: [{ ref: 'U9', x: 1, reference: 0 }] }, 'no element U9'],
    ['a resistor as an amplifier', { cmrr: [{ ref: 'R1', x: 1, reference: 0 }] }, 'R1'],
    ['a source as a resistor', { resistors: [{ ref: 'VREF', relative: 0.1 }] }, 'VREF is no resistor'],
    ['a tolerance of 100 %', { resistors: [{ ref: 'R1', relative: 1 }] }, 'below 1'],
    ['a node that is not there', { outputs: [{ id: 'y', nodes: { nowhere: 1 } }] }, 'no node nowhere'],
    [
      'a resistor as a source',
      {
        variables: [
          { id: 'v', nominal: 0, low: 0, high: 1, injections: [{ ref: 'R1', port: 'value', scale: 1 }] },
        ],
        outputs: [],
        cases: [],
      },
      'R1',
    ],
    [
      'a reversed range',
      { variables: [{ id: 'v', nominal: 0, low: 1, high: 0, injections: [] }], outputs: [], cases: [] },
      'Variable v',
    ],
  ])('refuses %s', (_, part, message) => {
    expect(() => computeExtremes(network, { ...request, ...part })).toThrow(message)
  })

  it('names the node of a network without a single answer', () => {
    const floating = new Bench().v('V1', 'in', 1).c('C1', 'in', 'fb', 1e-9).r('R1', 'fb', 'adc', 1e3).build()
    const only = {
      ...request,
      variables: [],
      cases: [{ id: 'a', pinned: {} }],
      outputs: [{ id: 'y', nodes: { adc: 1 } }],
      resistors: [{ ref: 'R1', relative: 0.01 }],
    }
    expect(() => computeExtremes(floating, only)).toThrow(CircuitError)
    expect(() => computeExtremes(floating, only)).toThrow('node fb has no dc path to ground')
  })
})
