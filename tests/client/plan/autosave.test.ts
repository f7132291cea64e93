import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import {
  createAutosave,
  type SaveAnswer,
  type SaveState,
  type Theirs,
} from '#client/features/plan/draft/autosave.ts'
import type { DraftDocument } from '#client/features/plan/draft/paths.ts'

const named = (name: string): DraftDocument => ({ format: 'spandrel-design/1', name })
const theirs: Theirs = {
  document: named('theirs'),
  version: 7,
  by: 'M. Fenwater',
  at: '2026-04-17T14:32:07.000Z',
}

function begin() {
  const sent: { document: DraftDocument; version: number; answer: (answer: SaveAnswer) => void }[] = []
  const states: SaveState[] = []
  const autosave = createAutosave({
    version: 3,
    savedAt: '2026-04-17T14:00:00.000Z',
    send: (document, version) => new Promise((answer) => sent.push({ document, version, answer })),
    onState: (state) => states.push(state),
    now: () => new Date('2026-04-17T15:00:00Z'),
  })
  const reply = async (answer: SaveAnswer) => {
    sent.at(-1)?.answer(answer)
    await vi.advanceTimersByTimeAsync(0)
  }
  return { autosave, sent, states, reply, last: () => states.at(-1) }
}

const saved = (version: number): SaveAnswer => ({ kind: 'saved', version, at: '2026-04-17T14:32:07.000Z' })

describe('autosave', () => {
  beforeEach(() => void vi.useFakeTimers())
  afterEach(() => void vi.useRealTimers())

  it('sends once after typing has paused, the newest document, with the version it was based on', async () => {
    const { autosave, sent, reply, last } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(500)
    autosave.change(named('ab'))
    await vi.advanceTimersByTimeAsync(500)
    expect(sent).toHaveLength(0)
    await vi.advanceTimersByTimeAsync(100)
    expect(sent.map(({ document, version }) => [document.name, version])).toEqual([['ab', 3]])
    await reply(saved(4))
    expect(last()).toEqual({ kind: 'saved', at: '2026-04-17T14:32:07.000Z' })
  })

  it('never has two requests under way, and sends what came meanwhile with the new version', async () => {
    const { autosave, sent, reply } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    autosave.change(named('b'))
    await vi.advanceTimersByTimeAsync(5000)
    expect(sent).toHaveLength(1)
    await reply(saved(4))
    expect(sent.map(({ document, version }) => [document.name, version])).toEqual([
      ['a', 3],
      ['b', 4],
    ])
  })

  it('keeps what was typed without connection, says so, and sends it when the connection is back', async () => {
    const { autosave, sent, reply, last } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    await reply({ kind: 'offline', message: 'No answer.' })
    expect(last()).toMatchObject({ kind: 'offline', since: '2026-04-17T15:00:00.000Z' })
    autosave.change(named('ab'))
    expect(last()).toMatchObject({ kind: 'offline' })
    await vi.advanceTimersByTimeAsync(2000)
    expect(sent).toHaveLength(2)
    await reply({ kind: 'offline', message: 'No answer.' })
    await vi.advanceTimersByTimeAsync(3999)
    expect(sent).toHaveLength(2)
    await vi.advanceTimersByTimeAsync(1)
    await reply(saved(4))
    expect(sent.at(-1)).toMatchObject({ document: named('ab'), version: 3 })
    expect(last()).toMatchObject({ kind: 'saved' })
  })

  it('sends nothing in a conflict until a person has decided', async () => {
    const { autosave, sent, reply, last } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    await reply({ kind: 'conflict', theirs })
    expect(last()).toEqual({ kind: 'conflict', theirs })
    autosave.change(named('ab'))
    await vi.advanceTimersByTimeAsync(60_000)
    await autosave.flush()
    expect(sent).toHaveLength(1)
  })

  it('sends ours over their version when ours is kept', async () => {
    const { autosave, sent, reply } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    await reply({ kind: 'conflict', theirs })
    autosave.change(named('ab'))
    autosave.keepMine()
    await vi.advanceTimersByTimeAsync(0)
    expect(sent.at(-1)).toMatchObject({ document: named('ab'), version: 7 })
  })

  it('goes on from their version when theirs is taken', async () => {
    const { autosave, sent, reply, last } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    await reply({ kind: 'conflict', theirs })
    autosave.takeTheirs()
    expect(last()).toEqual({ kind: 'saved', at: theirs.at })
    await vi.advanceTimersByTimeAsync(60_000)
    expect(sent).toHaveLength(1)
    autosave.change(named('theirs and more'))
    await vi.advanceTimersByTimeAsync(600)
    expect(sent.at(-1)).toMatchObject({ version: 7 })
  })

  it('says why a draft was refused and tries again with the next change', async () => {
    const { autosave, sent, reply, last } = begin()
    autosave.change(named('a'))
    await vi.advanceTimersByTimeAsync(600)
    await reply({ kind: 'refused', message: 'Sample rate: above 0.' })
    expect(last()).toEqual({ kind: 'refused', message: 'Sample rate: above 0.' })
    await vi.advanceTimersByTimeAsync(60_000)
    expect(sent).toHaveLength(1)
    autosave.change(named('b'))
    await vi.advanceTimersByTimeAsync(600)
    expect(sent).toHaveLength(2)
  })

  it('sends at once when the page is being left', async () => {
    const { autosave, sent } = begin()
    autosave.change(named('a'))
    void autosave.flush()
    await vi.advanceTimersByTimeAsync(0)
    expect(sent).toHaveLength(1)
  })
})
