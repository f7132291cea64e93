import { describe, expect, it } from 'vitest'
import { assess, type Assessment, type Place } from '#shared/budget/assess.ts'
import { buildChain, type Chain } from '#shared/design/chain.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import { buildBoard, type Board, type Draw } from '#tests/support/boards.ts'
import { arrangementDesigns, buildDesign } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { createRandom } from '#tests/support/random.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/*
 * What every board keeps to must hold for each board that can be built. Boards are drawn between their limits and, half
 * of them, at their limits; none may leave what the engine says is reached.
 */

const BOARDS = 150

/** Figures that make every kind of error count. */
const coarse = (document: DesignDocument): DesignDocument => ({
  ...document,
  sensor: { ...document.sensor, accuracy: { zero: 0.002, span: 0.003, linearity: 0.001 } },
  converter: { ...document.converter, inputCurrent: 1e-7 },
  rails: { ...document.rails, ripple: 0.01 },
  parts: {
    resistors: { tolerance: 0.02, drift: 1e-4 },
    amplifier: {
      vos: 2e-3,
      ib: 2e-9,
      ios: 1e-9,
      cmrr: 80,
      psrr: 70,
      outputResistanceLow: 30,
      outputResistanceHigh: 60,
    },
  },
})

const bridge: DesignDocument = buildDesign({
  sensor: {
    kind: 'bridge',
    quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
    excitation: { voltage: 5, same: 'positive' },
    sensitivity: 0.002,
  },
  choose: { arrangement: 'two-amplifier' },
})

const designs: [string, DesignDocument][] = [
  ...arrangementDesigns.map(([id, document]): [string, DesignDocument] => [id, coarse(document)]),
  ['two-amplifier', bridge],
  [
    'non-inverting-down',
    buildDesign({
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Humidity', unit: '%', low: 0, high: 100 },
        output: { low: 0.1, high: 1 },
        beyond: { low: 0.05, high: 1.05 },
      },
    }),
  ],
]

describe.each(designs)('%s', (id, document) => {
  const design = parseDesign(document)
  const trial = buildTrial(design, id)
  const bounds = assess(design, trial.spec, 'with-clips')
  const quantities = placesOf(design, bounds)

  it.each(quantities)('keeps every drawn board inside the reported bounds at the %s end', (place, q) => {
    const chain = buildChain(design, trial.spec, q)
    const random = createRandom(1 + q)
    for (let n = 0; n < BOARDS; n++) {
      const corner = n % 2 === 0
      const drawn = new Map<string, number>()
      const draw: Draw = (name) => {
        if (!drawn.has(name)) drawn.set(name, corner ? (random() < 0.5 ? -1 : 1) : 2 * random() - 1)
        return drawn.get(name) ?? 0
      }
      const board = buildBoard(design, chain, q, draw)
      expect(escapes(design, bounds, chain, place, board)).toEqual([])
    }
  })
})

describe.each([
  'level-shift',
  'non-inverting-up',
  'weighted-difference',
  'inverting-down',
  'difference-grounded',
])('%s', (id) => {
  const found = arrangementDesigns.find(([known]) => known === id)
  const design = parseDesign(coarse(found?.[1] ?? buildDesign()))
  const trial = buildTrial(design, id)
  const bounds = assess(design, trial.spec, 'with-clips')

  it.each(['low', 'high'] as const)(
    'is met at the %s end by the worst board, so that the bound is exact',
    (place) => {
      const q = design.sensor.quantity[place]
      const chain = buildChain(design, trial.spec, q)
      const reached = worstBoards(design, chain, q)
      chain.pins.forEach((pin, i) => {
        const range = reached(pin.node)
        const bound = bounds.pins[i]?.reached[place]
        expectClose(range.low, bound?.low ?? NaN, { absolute: PRODUCTS })
        expectClose(range.high, bound?.high ?? NaN, { absolute: PRODUCTS })
      })
    },
  )
})

/**
 * Lowest and highest voltage of a node over every corner of the resistors, sources one at a time and summed: they enter
 * linearly. Written without the engine's own walk.
 */
function worstBoards(
  design: Design,
  chain: Chain,
  q: number,
): (node: string) => { low: number; high: number } {
  const names: string[] = []
  buildBoard(design, chain, q, (name) => (names.push(name), 0))
  // A rejection multiplies the common mode: that is a corner too, not a term of the sum.
  const corner = [...chain.resistors.map((r) => r.ref), 'commonMode'].filter((name) => names.includes(name))
  const sources = [...new Set(names)].filter((name) => !corner.includes(name))
  const corners = Array.from({ length: 2 ** corner.length }, (_, n) => {
    const at = new Map(corner.map((name, bit): [string, number] => [name, n & (1 << bit) ? 1 : -1]))
    const solve = (moved: Record<string, number>) =>
      buildBoard(design, chain, q, (name) => at.get(name) ?? moved[name] ?? 0).solution
    const middle = solve({})
    // A supply rejection shows only where the supplies have moved.
    const apart = { VPOS: 1, VNEG: -1 }
    const far = solve(apart)
    const pairs = sources.map((source) =>
      source.endsWith('.psrr')
        ? { to: solve({ ...apart, [source]: 1 }), from: far }
        : { to: solve({ [source]: 1 }), from: middle },
    )
    return { middle, pairs }
  })
  return (node) => {
    let low = Infinity
    let high = -Infinity
    for (const { middle, pairs } of corners) {
      const at = middle.voltage(node)
      const half = pairs.reduce(
        (sum, { to, from }) => sum + Math.abs(to.voltage(node) - from.voltage(node)),
        0,
      )
      low = Math.min(low, at - half)
      high = Math.max(high, at + half)
    }
    return { low, high }
  }
}

function placesOf(design: Design, bounds: Assessment): [Place, number][] {
  const { sensor } = design
  const all: [Place, number][] = [
    ['low', sensor.quantity.low],
    ['high', sensor.quantity.high],
  ]
  if (sensor.kind === 'voltage' && sensor.beyond) {
    const { low, high } = sensor.output
    const along = (s: number) =>
      sensor.quantity.low + ((s - low) / (high - low)) * (sensor.quantity.high - sensor.quantity.low)
    all.push(['beyondLow', along(sensor.beyond.low)], ['beyondHigh', along(sensor.beyond.high)])
  }
  expect(all.map(([place]) => place)).toEqual(bounds.places)
  return all
}

/**
 * A rejection multiplies the volts at the inputs, and the bound takes the largest of them whatever else holds: it lies
 * outside by 80 dB of some tenths of a volt, times the noise gain, V.
 */
const PRODUCTS = 2.5e-5

/**
 * Rounding of a board's own solution, and the second order of a rejection of 80 dB over some volts, which the bound
 * leaves out; V.
 */
const ROUNDING = 1e-9 + 10 * 1e-4 ** 2

/** What on this board lies outside the bounds, in words. */
function escapes(design: Design, bounds: Assessment, chain: Chain, place: Place, board: Board): string[] {
  const { solution, referenceRatio } = board
  const found: string[] = []
  const above = (what: string, value: number, limit: number) => {
    if (!(value >= limit - ROUNDING)) found.push(`${what}: ${value} lies below ${limit}`)
  }
  const within = (what: string, value: number, range: { low: number; high: number } | undefined) => {
    above(`${what}, low`, value, range?.low ?? NaN)
    above(`${what}, high`, -value, -(range?.high ?? NaN))
  }
  chain.pins.forEach((pin, i) => {
    const watched = bounds.pins[i]
    expect(watched?.name).toBe(pin.name)
    within(`${pin.name} reaches`, solution.voltage(pin.node), watched?.reached[place])
    const judged = solution.voltage(pin.judged ?? pin.node)
    const delivered = pin.swing ? solution.current(pin.swing.ref) : 0
    const sunk = Math.max(0, -delivered) * (pin.swing?.low ?? 0)
    const sourced = Math.max(0, delivered) * (pin.swing?.high ?? 0)
    const low = judged - solution.voltage('vneg') - pin.low - sunk
    const high = solution.voltage('vpos') - pin.high - sourced - judged
    above(`${pin.name} room below`, low, watched?.margin[place].low ?? NaN)
    above(`${pin.name} room above`, high, watched?.margin[place].high ?? NaN)
  })
  const { low, high } = design.converter.input
  const converter = bounds.pins.at(-1)
  const scale = design.converter.reference ? referenceRatio : 1
  above('converter, room below', solution.output - low * scale, converter?.margin[place].low ?? NaN)
  above('converter, room above', high * scale - solution.output, converter?.margin[place].high ?? NaN)
  if (place !== 'low' && place !== 'high') return found
  within('y', solution.output / scale, bounds.y.worst[place])
  for (const level of bounds.levels) {
    const node = chain.levels.find((l) => l.node === level.node)
    within(`level ${level.node}`, solution.between(node?.p ?? '', node?.n ?? '0'), level.bounds[place])
  }
  for (const load of bounds.loads) within(`current of ${load.ref}`, -solution.current(load.ref), load)
  return found
}
