import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { Level } from '#shared/design/plan.ts'
import { layoutLevelBlock } from '#shared/drawings/level-block.ts'
import { describeLevels, layoutLevelDiagram, type LevelOptions } from '#shared/drawings/level-diagram.ts'
import { levelTable } from '#shared/drawings/level-figures.ts'
import { noteMeasures, sheetMeasures } from '#shared/drawings/level-scale.ts'
import { overlaps, type Shape, type TextShape } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { gauge, inverted, sampleLevel } from './sample-levels.ts'

const quantity = { name: 'Stilling-well level', unit: 'm', low: -0.1, high: 5.2 }
const options: LevelOptions = { mode: 'share', worst: true, quantity }
const nbsp = (words: string) => words.replaceAll('_', '\u00a0')

const texts = (shapes: readonly Shape[]) => shapes.filter((s): s is TextShape => s.type === 'text')
const named = (shapes: readonly Shape[], key: string) => {
  const shape = shapes.find((s) => s.key === key)
  if (shape?.type !== 'line') throw new Error(`no line ${key}`)
  return shape
}

describe('the level diagram', () => {
  const drawing = layoutLevelDiagram(gauge, options)

  it('has columns of 202 px, bays of 92 px with 172 px of linear region between 24 px of cut stone', () => {
    expect(drawing.width).toBe(118 + 4 * 202)
    expect(drawing.bays.map((bay) => bay.box)).toEqual(
      [0, 1, 2, 3].map((i) => ({ x: 166 + 202 * i, y: 49, width: 92, height: 220 })),
    )
    expect(named(drawing.shapes, 'S1 upper limit').y1).toBe(73)
    expect(named(drawing.shapes, 'S1 lower limit').y1).toBe(245)
  })

  it('draws a level at top + 172·(1 − (v − L)/(U − L)), limits reaching 5 px past the sides', () => {
    const y = (v: number, l: number, u: number) => 73 + 172 * (1 - (v - l) / (u - l))
    expect(named(drawing.shapes, 'S1 high').y1).toBeCloseTo(y(1.448, 0.15, 4.85), 9)
    expect(named(drawing.shapes, 'S1 low').y1).toBeCloseTo(y(0.38, 0.15, 4.85), 9)
    expect(named(drawing.shapes, 'sensor high').y1).toBeCloseTo(y(0.0104, -0.001, 0.012), 9)
    expect(named(drawing.shapes, 'S2 upper limit')).toMatchObject({ x1: 570 - 5, x2: 662 + 5 })
  })

  it('paints stone, opening, room, signal, overshoot, worst ends, levels, limits and sides in this order', () => {
    const adc = drawing.bays[3]?.shapes ?? []
    const order = ['poche', 'opening', 'room', 'wash', 'over', 'worst-over', 'level-over', 'limit', 'side']
    const at = order.map((style) => adc.findIndex((s) => s.style === style))
    expect(at).not.toContain(-1)
    expect([...at].sort((a, b) => a - b)).toEqual(at)
  })

  it('hatches what is beyond a limit, and prints its share and the worst clip point there', () => {
    const adc = drawing.bays[3]
    const over = adc?.shapes.find((s) => s.style === 'over')
    if (over?.type !== 'rect') throw new Error('no overshoot')
    expect(over.y + over.height).toBe(73)
    expect(over.height).toBeCloseTo((172 * (4.235 - 4.096)) / 4.096, 9)
    const words = texts(adc?.shapes ?? []).map((t) => t.text)
    // (4.265 − 4.096)/4.096 = 4.13 %, rounded up; 5.0161 m less 0.0397 m on the worst board, rounded down.
    expect(words).toContain(nbsp('4.2_% over'))
    expect(words).toContain(nbsp('at 4.976_m'))
    const nominal = layoutLevelDiagram(gauge, { ...options, worst: false })
    const nominalWords = texts(nominal.bays[3]?.shapes ?? []).map((t) => t.text)
    expect(nominalWords).toContain(nbsp('3.4_% over'))
    expect(nominalWords).toContain(nbsp('at 5.016_m'))
  })

  it('joins the ends of the measurand from bay to bay, crossing over at an inverting stage', () => {
    const flipped = layoutLevelDiagram(inverted, options)
    const high = named(flipped.links, 'link sensor high')
    const low = named(flipped.links, 'link sensor low')
    expect(high.y1).toBeLessThan(low.y1)
    expect(high.y2).toBeGreaterThan(low.y2)
    const straight = [named(drawing.links, 'link S1 high'), named(drawing.links, 'link S1 low')]
    expect((straight[0]?.y1 ?? 0) < (straight[1]?.y1 ?? 0)).toBe(true)
    expect((straight[0]?.y2 ?? 0) < (straight[1]?.y2 ?? 0)).toBe(true)
  })

  it('holds a level that is far out 3 px inside the outer edge and marks the break', () => {
    const far = [sampleLevel({ node: 'S1', title: 'After S1', nominal: [-10, 10], region: [0, 5] })]
    const shapes = layoutLevelDiagram(far, options).shapes
    expect(named(shapes, 'S1 high').y1).toBe(52)
    expect(named(shapes, 'S1 low').y1).toBe(266)
    expect(shapes.filter((s) => s.style === 'break')).toHaveLength(4)
    expect(drawing.shapes.some((s) => s.style === 'break')).toBe(false)
  })

  it('turns the heads of a dimension outside where the gap is small', () => {
    const heads = (node: string) =>
      drawing.bays
        .find((b) => b.node === node)
        ?.shapes.flatMap((s) => (s.type === 'polyline' && s.style.startsWith('head') ? [s.points] : []))
    // After S1 the room above is 72 %: both tips point outwards from within, at the limit and at the level.
    const inside = heads('S1')
      ?.slice(0, 2)
      .map((p) => [p[0]?.[1] ?? 0, p[1]?.[1] ?? 0])
    expect(inside?.map(([tip = 0, tail = 0]) => Math.sign(tail - tip))).toEqual([1, -1])
    const outside = heads('sensor')
      ?.slice(0, 2)
      .map((p) => [p[0]?.[1] ?? 0, p[1]?.[1] ?? 0])
    expect(outside?.map(([tip = 0, tail = 0]) => Math.sign(tail - tip))).toEqual([-1, 1])
  })

  it('puts the arch over the bay that is being edited and over no other', () => {
    const styles = layoutLevelDiagram(gauge, { ...options, editing: 'S2' }).bays.map((bay) =>
      bay.shapes.some((s) => s.style === 'arch'),
    )
    expect(styles).toEqual([false, false, true, false])
  })

  it('frames a node that is not known with dashes and says so', () => {
    const unknown: Level = { ...(gauge[1] as Level), state: 'unknown' }
    const shapes = layoutLevelDiagram([unknown], options).bays[0]?.shapes ?? []
    expect(shapes.map((s) => s.style)).toEqual(['unknown', 'unknown-text'])
    expect(levelTable([unknown], options).rows.every((row) => row.cells[0]?.state === 'unknown')).toBe(true)
  })

  it('draws all bays on one scale in volts, the sensor times a printed power of ten', () => {
    const volts = layoutLevelDiagram(gauge, { ...options, mode: 'volts' })
    expect(named(volts.shapes, 'S2 high').y1).toBeCloseTo(named(volts.shapes, 'adc high').y1, 9)
    const perVolt = (node: string, up: number, down: number) =>
      (named(volts.shapes, `${node} low`).y1 - named(volts.shapes, `${node} high`).y1) / (up - down)
    expect(perVolt('S1', 1.448, 0.38)).toBeCloseTo(perVolt('S2', 4.235, 0.228), 6)
    expect(perVolt('sensor', 0.0104, -0.0002)).toBeCloseTo(100 * perVolt('S2', 4.235, 0.228), 4)
    expect(texts(volts.headings).map((t) => t.text)).toContain('Sensor output × 100')
  })

  it('reads a mark out with its node, place, volts, measurand and room', () => {
    const mark = (name: string) => drawing.bays[2]?.marks.find((m) => m.name === name)?.words
    expect(mark('high')).toBe(nbsp('After S2, high, 4.235_V, at 5.2_m, 13.8_% room'))
    expect(mark('low')).toBe(nbsp('After S2, low, 0.2280_V, at −0.1_m, 2.6_% room'))
    expect(mark('upper limit')).toContain(nbsp('4.900_V, set by U1 output, met at '))
    expect(drawing.bays[2]?.marks.map((m) => m.name)).toEqual([
      'upper limit',
      'worst high',
      'high',
      'low',
      'worst low',
      'lower limit',
    ])
    expect(
      layoutLevelDiagram(inverted, options).bays[1]?.marks.find((m) => m.name === 'high')?.words,
    ).toContain(nbsp('at −0.1_m'))
  })

  it('has a table with five lines for every node, worst case first and the nominal figure beside it', () => {
    const table = levelTable(gauge, options)
    expect(table.nodes.map((n) => n.title)).toEqual([
      'Sensor output',
      'After S1',
      'After S2',
      'Converter input',
    ])
    expect(table.rows.map((r) => r.name)).toEqual([
      'Signal',
      'Linear region',
      'Room above',
      'Room below',
      'Limits met at',
    ])
    expect(table.rows.map((r) => r.cells[3]?.text)).toEqual(
      ['0.228 to 4.235_V', '0 to 4.096_V', '4.2_% over', '4.8_%', '−0.361 and 4.976_m'].map(nbsp),
    )
    expect(table.rows.map((r) => r.cells[3]?.state)).toEqual([undefined, undefined, 'over', 'clear', 'over'])
    expect(table.rows[2]?.cells[3]?.small).toBe(nbsp('nominal 3.4_% over'))
    expect(table.rows[3]?.cells[2]?.state).toBe('tight')
  })

  it('says in one sentence which node is worst', () => {
    expect(describeLevels(gauge, options)).toBe(
      nbsp('Level diagram of 4 nodes. 1 leaves the linear region, most at “Converter input”, 4.13_% over.'),
    )
    expect(describeLevels(gauge.slice(0, 2), options)).toContain('Least room is')
  })
})

const anyLevel = (node: string, title: string) =>
  fc
    .record({
      low: fc.double({ min: -5, max: 2, noNaN: true }),
      width: fc.double({ min: 0.5, max: 10, noNaN: true }),
      a: fc.double({ min: -0.3, max: 1.3, noNaN: true }),
      b: fc.double({ min: -0.3, max: 1.3, noNaN: true }),
      spread: fc.double({ min: 0, max: 0.2, noNaN: true }),
    })
    .filter(({ a, b }) => Math.abs(a - b) > 1e-3)
    .map(({ low, width, a, b, spread }) =>
      sampleLevel({
        node,
        title,
        nominal: [low + a * width, low + b * width],
        region: [low, low + width],
        spread,
        gain: 2,
      }),
    )

const anyChain = fc.tuple(
  anyLevel('sensor', 'Sensor output'),
  anyLevel('S1', 'After S1'),
  anyLevel('adc', 'Converter input'),
)

describe('any chain of levels', () => {
  it('keeps every figure clear of the others, on the page and in the note', () => {
    fc.assert(
      fc.property(
        anyChain,
        fc.boolean(),
        fc.constantFrom(sheetMeasures, noteMeasures(3)),
        (levels, worst, measures) => {
          const all = texts(layoutLevelDiagram(levels, { ...options, worst, measures }).shapes).map((t) => ({
            words: t.text,
            box: textBox(t),
          }))
          const pairs = all.flatMap((a, i) =>
            all
              .slice(i + 1)
              .flatMap((b) => (overlaps(a.box, b.box, -0.5) ? [`${a.words} | ${b.words}`] : [])),
          )
          expect(pairs).toEqual([])
        },
      ),
      { numRuns: 400, seed: 7 },
    )
  })

  it('stays inside its own edges and gives no figure that is not a number', () => {
    fc.assert(
      fc.property(anyChain, fc.constantFrom('share' as const, 'volts' as const), (levels, mode) => {
        const drawing = layoutLevelDiagram(levels, { ...options, mode })
        expect(JSON.stringify(drawing)).not.toMatch(/null,"style|NaN/)
        for (const shape of drawing.shapes) {
          if (shape.type === 'text') {
            const box = textBox(shape)
            expect(box.y).toBeGreaterThanOrEqual(0)
            expect(box.y + box.height).toBeLessThanOrEqual(drawing.height)
          }
          if (shape.type === 'rect') {
            expect(shape.height).toBeGreaterThanOrEqual(0)
            expect(shape.y).toBeGreaterThanOrEqual(0)
            expect(shape.y + shape.height).toBeLessThanOrEqual(drawing.height)
          }
        }
        for (const level of levels) {
          const block = layoutLevelBlock(level, options, 288)
          for (const s of block.shapes)
            if (s.type === 'rect') expect(s.x >= 0 && s.x + s.width <= 288 && s.width >= 0).toBe(true)
        }
      }),
      { numRuns: 300, seed: 11 },
    )
  })

  it('never prints a clip point or a room better than it is', () => {
    const number = (words: string) => Number(words.replace('−', '-').replace(/[^\d.-]/g, ''))
    fc.assert(
      fc.property(anyLevel('S1', 'After S1'), (level) => {
        const table = levelTable([level], options)
        const [, , above, below, met] = table.rows.map((r) => r.cells[0]?.text ?? '')
        const room = (words: string) => (number(words) / 100) * (words.includes('over') ? -1 : 1)
        expect(room(above ?? '')).toBeLessThanOrEqual(level.room.high + 1e-12)
        expect(room(below ?? '')).toBeLessThanOrEqual(level.room.low + 1e-12)
        const [lower, upper] = (met ?? '').split(' and ').map(number)
        const exact = [level.worstClipsAt.low ?? NaN, level.worstClipsAt.high ?? NaN].sort((a, b) => a - b)
        const slack = 1e-12 * Math.max(...exact.map(Math.abs))
        expect(lower).toBeGreaterThanOrEqual((exact[0] ?? NaN) - slack)
        expect(upper).toBeLessThanOrEqual((exact[1] ?? NaN) + slack)
      }),
      { numRuns: 500, seed: 3 },
    )
  })
})
