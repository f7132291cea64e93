import { readFileSync } from 'node:fs'
import { beforeAll, describe, expect, it } from 'vitest'
import type { Channel } from '#shared/api/channels.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Candidate, Level, Plan } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { arrangeChannels } from '#client/features/channels/arrange.ts'
import { boardFacts } from '#client/features/channels/board-facts.ts'
import type { ChannelSummary } from '#client/features/channels/use-channel-plans.ts'
import {
  chosenOf,
  errorWords,
  openWords,
  roomWords,
  sensorWords,
  spanWords,
} from '#client/features/channels/words.ts'

const spaces = (text: string) => text.replaceAll('\u00a0', ' ')
const document = JSON.parse(readFileSync('docs/examples/flow-velocity.json', 'utf8')) as DesignDocument
let plan: Plan

beforeAll(() => {
  plan = planDesign(document)
}, 60_000)

/** The plan with other levels: rooms and clip points as wanted, all else as planned. */
function withLevels(...changes: Partial<Level>[]): Plan {
  const chosen = chosenOf(plan)
  const level = chosen?.levels?.[0]
  if (!chosen || !level) throw new Error('the example has no chosen arrangement')
  const candidate: Candidate = { ...chosen, levels: changes.map((change) => ({ ...level, ...change })) }
  return { ...plan, candidates: [candidate], chosen: 0 }
}

describe('least room in words', () => {
  it('names figure, side and node of the worst board', () => {
    const words = roomWords(
      withLevels(
        { node: 'sensor', room: { low: 0.2, high: 0.3 }, state: 'clear' },
        { node: 'S2', room: { low: 0.4, high: 0.0817 }, state: 'clear' },
      ),
      document,
    )
    expect(spaces(words.text)).toBe('8.1 % above S2')
    expect(words.state).toBe('clear')
  })

  it('says both ways where both print the same', () => {
    const words = roomWords(
      withLevels({ node: 'adc', room: { low: 0.0701, high: 0.0709 }, state: 'clear' }),
      document,
    )
    expect(spaces(words.text)).toBe('7.0 % both ways converter')
  })

  it('takes the state of the worst node, wherever the least room is', () => {
    const words = roomWords(
      withLevels(
        { room: { low: 0.02, high: 0.5 }, state: 'tight' },
        { room: { low: 0.05, high: 0.05 }, state: 'clear' },
      ),
      document,
    )
    expect(words.state).toBe('tight')
  })

  it('says where it clips, never wider than it is', () => {
    const over = (low: number, high: number) =>
      roomWords(
        withLevels({
          node: 'adc',
          room: { low, high },
          state: 'over',
          worstClipsAt: { low: -2.41239, high: 2.41239 },
        }),
        document,
      )
    expect(spaces(over(0.1, -0.02).text)).toBe('Clips at 2.412 m/s, converter')
    expect(spaces(over(-0.02, 0.1).text)).toBe('Clips at −2.412 m/s, converter')
    expect(over(0.1, -0.02)).toMatchObject({ state: 'over', least: -0.02 })
  })

  it('says so where no arrangement works', () => {
    expect(roomWords({ ...plan, chosen: null }, document)).toEqual({
      state: 'over',
      text: 'No arrangement works',
      least: null,
    })
  })
})

describe('other words of a row', () => {
  it('speaks of the span and the sensor, or says what is missing', () => {
    expect(spaces(spanWords(document))).toBe('−2.5 to 2.5 m/s')
    expect(spaces(spanWords(document, ','))).toBe('−2,5 to 2,5 m/s')
    expect(spanWords({})).toBe('no span yet')
    expect(sensorWords(document)).toBe('voltage output')
    expect(sensorWords({})).toBe('no sensor yet')
  })

  it('names what is open first', () => {
    const fault = (path: string) => ({ path, reason: 'missing', accepted: 'something' })
    expect(openWords([fault('converter.input'), fault('sensor')])).toBe('No sensor and span yet')
    expect(openWords([fault('converter.input')])).toBe('No converter range yet')
    expect(openWords([fault('rails.positive')])).toBe('No rails yet')
    expect(openWords([])).toBe('Not complete yet')
  })

  it('gives the expanded uncertainty in the measurand’s unit, rounded up, against the target', () => {
    const budget = chosenOf(plan)?.budget
    if (!budget) throw new Error('the example has no budget')
    const expected = budget.totals[budget.target?.state ?? 'asBuilt'].expanded / budget.perQuantity
    const words = errorWords(plan, document)
    expect(words.error).toBeCloseTo(expected, 12)
    expect(Number.parseFloat(words.text)).toBeGreaterThanOrEqual(expected - 1e-12)
    const withTarget = errorWords(plan, { ...document, target: { limit: 0.01 } })
    expect(withTarget.target).toBeCloseTo(0.05, 12)
    expect(spaces(withTarget.text)).toMatch(/^\d+(\.\d+)? of 50 mm\/s$/)
    expect(errorWords(null, { ...document, target: { limit: 0.5, per: 'quantity' } }).text).toMatch(/^target/)
    expect(errorWords(null, {}).text).toBe('not known')
  })
})

const channel = (number: number, more: Partial<Channel> = {}): Channel => ({
  id: `ch-${number}`,
  number,
  position: number,
  group: '',
  name: `Channel ${number}`,
  document,
  version: 1,
  createdAt: '2026-05-01T08:00:00.000Z',
  updatedAt: `2026-05-0${number}T08:00:00.000Z`,
  updatedBy: null,
  ...more,
})

const row = (
  c: Channel,
  least: number | null,
  state: 'clear' | 'over' | 'unknown' = 'clear',
): ChannelSummary => ({
  channel: c,
  plan: null,
  faults: [],
  room: { state, text: '', least },
  error: { error: null, target: null, text: '' },
  failure: null,
})

describe('order and groups of the list', () => {
  const rows = [
    row(channel(3, { group: 'Mast', name: 'Air pressure' }), 0.05),
    row(channel(1, { group: 'Well', name: 'Level' }), 0.2),
    row(channel(2, { group: 'Mast', name: 'Humidity' }), null, 'unknown'),
    row(channel(4, { group: '', name: 'Battery' }), -0.1, 'over'),
  ]
  const numbers = (...args: Parameters<typeof arrangeChannels>) =>
    arrangeChannels(...args).map((group) => [group.name, group.rows.map((r) => r.channel.number)])

  it('groups by location in the order of the channel numbers', () => {
    expect(numbers(rows, '', 'number')).toEqual([
      ['Well', [1]],
      ['Mast', [2, 3]],
      ['No location', [4]],
    ])
  })

  it('puts what is over first and what is not known last', () => {
    expect(numbers(rows, '', 'room')).toEqual([[null, [4, 3, 1, 2]]])
  })

  it('orders by name and by last change', () => {
    expect(numbers(rows, '', 'name')).toEqual([[null, [3, 4, 2, 1]]])
    expect(numbers(rows, '', 'change')).toEqual([[null, [4, 3, 2, 1]]])
  })

  it('finds by number, name, location and sensor, all words together', () => {
    expect(numbers(rows, 'ch 03', 'name')).toEqual([[null, [3]]])
    expect(numbers(rows, 'mast HUM', 'name')).toEqual([[null, [2]]])
    expect(numbers(rows, 'voltage', 'name')).toEqual([[null, [3, 4, 2, 1]]])
    expect(numbers(rows, 'nothing', 'name')).toEqual([[null, []]])
  })
})

describe('title block of a board', () => {
  it('gives one figure where the channels agree and how many where not', () => {
    const other = { ...document, converter: { ...document.converter, bits: 12 } }
    expect(spaces(boardFacts([channel(1)]).converters)).toBe(`${document.converter.bits} bit, 0 to 2.5 V`)
    expect(boardFacts([channel(1), channel(2, { document: other })]).converters).toBe('2 kinds')
    expect(boardFacts([])).toMatchObject({ converters: 'open', supply: 'open', lastChange: 'none yet' })
    expect(boardFacts([channel(1), channel(2)]).lastChange).toMatch(/^CH 02, /)
    expect(spaces(boardFacts([channel(1)]).rule)).toBe('3 %')
  })
})
