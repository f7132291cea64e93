import { describe, expect, it } from 'vitest'
import { channelsApi } from '#shared/api/channels.ts'
import { toUrl } from '#shared/api/endpoint.ts'
import { endpoints } from '#shared/api/index.ts'
import { noteApi } from '#shared/api/note.ts'

describe('the address of an endpoint', () => {
  it('holds its parameters and query', () => {
    const place = { workspaceId: 'upper', projectId: 'weir', channelId: 'level' }
    expect(toUrl(channelsApi.get, place)).toBe('/api/workspaces/upper/projects/weir/channels/level')
    expect(toUrl(noteApi.create, {}, { paper: 'Letter' })).toBe('/api/note?paper=Letter')
    expect(toUrl(noteApi.create, {})).toBe('/api/note')
  })

  it('is never changed by what a parameter holds', () => {
    const place = { workspaceId: '../x', projectId: 'a/b', channelId: '?c' }
    expect(toUrl(channelsApi.get, place)).toBe('/api/workspaces/..%2Fx/projects/a%2Fb/channels/%3Fc')
  })

  it('says which parameter is missing', () => {
    const place = { workspaceId: 'upper', projectId: 'weir' } as {
      workspaceId: string
      projectId: string
      channelId: string
    }
    expect(() => toUrl(channelsApi.get, place)).toThrow('channelId')
  })
})

describe('the endpoints', () => {
  it('are told apart by method and path', () => {
    const names = endpoints.map(({ method, path }) => `${method} ${path}`)
    expect(new Set(names).size).toBe(names.length)
  })

  it('of stored things name their workspace, and only these need a role', () => {
    for (const { path, access } of endpoints) expect(path.includes(':workspaceId')).toBe(access !== 'public')
  })

  it('take exactly the parameters of their path', () => {
    for (const { path, params } of endpoints) {
      const names = [...path.matchAll(/:([A-Za-z]+)/g)].map(([, name]) => String(name))
      const full = Object.fromEntries(names.map((name) => [name, 'some-id']))
      expect(params.safeParse(full).success).toBe(true)
      expect(params.safeParse({ ...full, other: 'some-id' }).success).toBe(false)
      for (const name of names) expect(params.safeParse({ ...full, [name]: undefined }).success).toBe(false)
    }
  })

  it('only compute where they say so, and never on a GET or with a role', () => {
    const computing = endpoints
      .filter((endpoint) => endpoint.computes)
      .map(({ method, path }) => `${method} ${path}`)
    expect(computing).toEqual(['POST /api/plan', 'POST /api/note'])
  })
})
