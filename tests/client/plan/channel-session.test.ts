import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import type { Channel } from '#shared/api/channels.ts'

/** As much of a browser as two tabs share or do not share. */
class MemoryStorage {
  private held = new Map<string, string>()
  get length() {
    return this.held.size
  }
  key(index: number) {
    return [...this.held.keys()][index] ?? null
  }
  getItem(key: string) {
    return this.held.get(key) ?? null
  }
  setItem(key: string, value: string) {
    this.held.set(key, value)
  }
  removeItem(key: string) {
    this.held.delete(key)
  }
  copy() {
    const copied = new MemoryStorage()
    for (const [key, value] of this.held) copied.setItem(key, value)
    return copied
  }
}

const id = (last: string) => `0190a000-0000-7000-8000-00000000000${last}`
const place = { workspaceId: id('1'), projectId: id('2'), channelId: id('3') }

// Not a whole design, so that nothing is planned: only the saving is looked at here.
const channelAt = (version: number, name: string): Channel => ({
  id: place.channelId,
  number: 1,
  position: 0,
  group: '',
  name,
  document: { format: 'spandrel-design/1', name } as Channel['document'],
  version,
  createdAt: '2026-04-17T14:00:00.000Z',
  updatedAt: '2026-04-17T14:32:07.000Z',
  updatedBy: { id: id('4'), name: 'M. Fenwater' },
})

/** The channel as it is stored; a save on another version is turned down with 412. */
function serve(channel: Channel) {
  const server = { channel, asked: [] as { name: string; base: string | null }[], reachable: true }
  vi.stubGlobal('fetch', async (_: string, init: RequestInit) => {
    if (!server.reachable) throw new TypeError('no connection')
    const { document } = JSON.parse(String(init.body)) as { document: { name: string } }
    const base = new Headers(init.headers).get('If-Match')
    server.asked.push({ name: document.name, base })
    if (base !== `"${server.channel.version}"`) {
      const error = { code: 'stale_version', message: 'Changed meanwhile.', requestId: 'r1' }
      return Response.json({ error, current: server.channel }, { status: 412 })
    }
    server.channel = channelAt(server.channel.version + 1, document.name)
    return Response.json(server.channel)
  })
  return server
}

/** Loads the page in a tab: modules start anew, what the browser keeps stays. */
async function load(channel: Channel, tab = new MemoryStorage()) {
  vi.resetModules()
  const page = new EventTarget()
  vi.stubGlobal('window', page)
  vi.stubGlobal('document', Object.assign(new EventTarget(), { visibilityState: 'visible' }))
  vi.stubGlobal('sessionStorage', tab)
  const { channelSession } = await import('#client/features/plan/session/channel-session.ts')
  const session = channelSession(channel, place, () => undefined)
  return {
    session,
    tab,
    name: () => session.draft.getState().document.name,
    kind: () => session.saving.get().kind,
    async type(value: string) {
      session.draft.dispatch({ type: 'type', path: 'name', value, text: value, label: 'Name' })
      await vi.advanceTimersByTimeAsync(1000)
    },
    async leave() {
      vi.stubGlobal('sessionStorage', tab)
      page.dispatchEvent(new Event('pagehide'))
      session.autosave.stop()
      await vi.advanceTimersByTimeAsync(0)
    },
  }
}

const settle = () => vi.advanceTimersByTimeAsync(60_000)

// Every page load reads the modules anew, which takes its time on a busy machine.
describe('a channel’s unsaved work', { timeout: 30_000 }, () => {
  beforeEach(() => {
    vi.useFakeTimers()
    vi.stubGlobal('localStorage', new MemoryStorage())
  })
  afterEach(() => {
    vi.useRealTimers()
    vi.unstubAllGlobals()
  })

  it('stays in the conflict over reloads, and nothing is sent until a person has decided', async () => {
    const server = serve(channelAt(3, 'base'))
    let page = await load(server.channel)
    server.channel = channelAt(7, 'theirs')
    await page.type('mine')
    expect(page.kind()).toBe('conflict')
    await page.type('mine and more')
    expect(server.asked).toEqual([{ name: 'mine', base: '"3"' }])
    for (let reload = 0; reload < 2; reload += 1) {
      await page.leave()
      page = await load(server.channel, page.tab)
      await settle()
      expect(page.session.saving.get()).toMatchObject({ kind: 'conflict', theirs: { version: 7 } })
      expect(page.name()).toBe('mine and more')
    }
    expect(server.asked).toHaveLength(1)
    expect(server.channel.name).toBe('theirs')
    page.session.autosave.keepMine()
    await settle()
    expect(server.channel).toMatchObject({ version: 8, name: 'mine and more' })
    await page.leave()
    expect((await load(server.channel, page.tab)).kind()).toBe('saved')
  })

  it('comes into the conflict when somebody saved while it waited for the connection', async () => {
    const server = serve(channelAt(3, 'base'))
    server.reachable = false
    const page = await load(server.channel)
    await page.type('mine')
    expect(page.kind()).toBe('offline')
    await page.leave()
    server.reachable = true
    server.channel = channelAt(4, 'theirs')
    const again = await load(server.channel, page.tab)
    await settle()
    expect([again.kind(), again.name()]).toEqual(['conflict', 'mine'])
    expect(server.asked).toEqual([])
    again.session.takeTheirs()
    await settle()
    expect([again.kind(), again.name()]).toEqual(['saved', 'theirs'])
    expect(server.asked).toEqual([])
  })

  it('is sent after a reload when nobody saved meanwhile', async () => {
    const server = serve(channelAt(3, 'base'))
    server.reachable = false
    const page = await load(server.channel)
    await page.type('mine')
    await page.leave()
    server.reachable = true
    const again = await load(server.channel, page.tab)
    await settle()
    expect(again.kind()).toBe('saved')
    expect(server.asked).toEqual([{ name: 'mine', base: '"3"' }])
  })

  it('is no conflict with its own save that arrived while the page was being left', async () => {
    const server = serve(channelAt(3, 'base'))
    server.reachable = false
    const page = await load(server.channel)
    await page.type('mine')
    await page.leave()
    server.reachable = true
    server.channel = channelAt(4, 'mine')
    const again = await load(server.channel, page.tab)
    expect(again.kind()).toBe('saved')
    await again.type('mine and more')
    expect(server.asked).toEqual([{ name: 'mine and more', base: '"4"' }])
  })

  it.each([
    ['another tab', () => new MemoryStorage()],
    ['a copy of the tab', (tab: MemoryStorage) => tab.copy()],
  ])('is not taken by %s', async (_, open) => {
    const server = serve(channelAt(3, 'base'))
    server.reachable = false
    const first = await load(server.channel)
    await first.type('first')
    const second = await load(server.channel, open(first.tab))
    expect(second.name()).toBe('base')
    await second.type('second')
    await second.leave()
    await first.leave()
    expect((await load(server.channel, first.tab)).name()).toBe('first')
    expect((await load(server.channel, second.tab)).name()).toBe('second')
  })

  it('expires when its tab has not come back for a month', async () => {
    const server = serve(channelAt(3, 'base'))
    server.reachable = false
    const page = await load(server.channel)
    await page.type('mine')
    await page.leave()
    expect(localStorage.length).toBe(1)
    vi.setSystemTime(Date.now() + 31 * 24 * 3600 * 1000)
    await load(server.channel)
    expect(localStorage.length).toBe(0)
  })
})
