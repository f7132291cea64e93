import { readFileSync } from 'node:fs'
import { afterEach, describe, expect, it, vi } from 'vitest'
import type { Session } from '#shared/api/session.ts'
import { moveVisitorWork, readVisitorWork } from '#client/lib/visitor-work.ts'

const document: unknown = JSON.parse(readFileSync('docs/examples/flow-velocity.json', 'utf8'))
const work = { version: 1, document, savedAt: '2026-05-02T10:00:00.000Z' }

function storage(content: string | null) {
  const removed: string[] = []
  return {
    removed,
    getItem: (key: string) => (key === 'spandrel.visitor' ? content : null),
    removeItem: (key: string) => void removed.push(key),
  }
}

const session = (...roles: Session['workspaces'][number]['roles']): Session => ({
  user: { id: 'wren', name: 'Wren Asher', email: 'wren@asher.example' },
  workspaces: [{ id: 'asher', name: 'Asher Works', prefix: 'AW', roles }],
  demo: false,
  signUpOpen: true,
})

const project = (name: string) => ({
  id: 'some-project',
  name,
  board: '',
  description: '',
  version: 1,
  channelCount: 0,
  createdAt: work.savedAt,
  updatedAt: work.savedAt,
})

const channel = {
  id: 'new-channel',
  number: 1,
  position: 0,
  group: '',
  name: 'Flow velocity',
  document,
  version: 1,
  createdAt: work.savedAt,
  updatedAt: work.savedAt,
  updatedBy: null,
}

function server(projects: unknown[]) {
  const asked: string[] = []
  vi.stubGlobal('fetch', (url: string, init: RequestInit) => {
    asked.push(`${init.method} ${url}`)
    const body =
      init.method === 'GET'
        ? { projects }
        : url.endsWith('/channels')
          ? channel
          : project('From this browser')
    return Promise.resolve(new Response(JSON.stringify(body), { status: init.method === 'GET' ? 200 : 201 }))
  })
  return asked
}

afterEach(() => vi.unstubAllGlobals())

describe('a plan that a visitor made', () => {
  it('is read only where it is one', () => {
    expect(readVisitorWork(storage(JSON.stringify(work)))?.document.name).toBeTypeOf('string')
    for (const content of [
      null,
      '',
      '{',
      '5',
      '{"version":2}',
      '{"version":1,"document":null,"savedAt":"x"}',
    ])
      expect(readVisitorWork(storage(content))).toBeNull()
  })

  it('moves into a project of its own and leaves the browser only then', async () => {
    const asked = server([])
    const kept = storage(JSON.stringify(work))
    expect(await moveVisitorWork(session('owner', 'engineer'), kept)).toMatchObject({
      kind: 'moved',
      workspaceId: 'asher',
      channel: { id: 'new-channel' },
    })
    expect(asked).toEqual([
      'GET /api/workspaces/asher/projects',
      'POST /api/workspaces/asher/projects',
      'POST /api/workspaces/asher/projects/some-project/channels',
    ])
    expect(kept.removed).toEqual(['spandrel.visitor'])
  })

  it('uses the project that took earlier plans', async () => {
    const asked = server([project('From this browser')])
    await moveVisitorWork(session('engineer'), storage(JSON.stringify(work)))
    expect(asked.filter((line) => line === 'POST /api/workspaces/asher/projects')).toEqual([])
  })

  it('stays in the browser where the role adds no channels, and where the server refuses it', async () => {
    const kept = storage(JSON.stringify(work))
    expect(await moveVisitorWork(session('reader'), kept)).toEqual({ kind: 'nowhere' })
    vi.stubGlobal('fetch', () => Promise.reject(new TypeError('no connection')))
    await expect(moveVisitorWork(session('engineer'), kept)).rejects.toMatchObject({ code: 'offline' })
    expect(kept.removed).toEqual([])
  })

  it('is not looked for where there is none', async () => {
    expect(await moveVisitorWork(session('engineer'), storage(null))).toEqual({ kind: 'none' })
  })
})
