import { afterEach, describe, expect, it, vi } from 'vitest'
import { channelsApi } from '#shared/api/channels.ts'
import { projectsApi } from '#shared/api/projects.ts'
import { sessionApi } from '#shared/api/session.ts'
import { ApiError, call, messageOf } from '#client/lib/api-client.ts'

const answer = (status: number, body?: unknown) =>
  new Response(body === undefined ? null : JSON.stringify(body), { status })

function stub(response: Response | Error) {
  const sent = vi.fn<typeof fetch>(() =>
    response instanceof Error ? Promise.reject(response) : Promise.resolve(response),
  )
  vi.stubGlobal('fetch', sent)
  return sent
}

const failure = (promise: Promise<unknown>) =>
  promise.then(
    () => expect.fail('the call should have been refused'),
    (error: unknown) => error as ApiError,
  )

afterEach(() => vi.unstubAllGlobals())

describe('calling the server', () => {
  const session = { user: null, workspaces: [], demo: true, signUpOpen: true }

  it('puts parameters into the path and reads the answer by its schema', async () => {
    const sent = stub(answer(200, { projects: [] }))
    expect(await call(projectsApi.list, { params: { workspaceId: 'quellmoor' } })).toEqual({ projects: [] })
    expect(sent.mock.calls[0]?.[0]).toBe('/api/workspaces/quellmoor/projects')
  })

  it('sends the request header with every change and with no question', async () => {
    const sent = stub(answer(200, session))
    await call(sessionApi.get)
    expect(sent.mock.calls[0]?.[1]?.headers).not.toHaveProperty('X-Spandrel')
    sent.mockResolvedValueOnce(answer(204))
    await call(sessionApi.signOut)
    expect(sent.mock.calls[1]?.[1]).toMatchObject({ method: 'DELETE', headers: { 'X-Spandrel': '1' } })
  })

  it('sends the version that a change is based on', async () => {
    const sent = stub(answer(404, undefined))
    const params = { workspaceId: 'quellmoor', projectId: 'station-4', channelId: 'ch-01' }
    await failure(call(channelsApi.update, { params, body: { group: 'Weir' }, version: 7 }))
    expect(sent.mock.calls[0]?.[1]?.headers).toMatchObject({
      'If-Match': '"7"',
      'Content-Type': 'application/json',
    })
  })

  it('hands on code, fields, reference and the whole body of a refusal', async () => {
    const body = {
      error: { code: 'stale_version', message: 'Saved meanwhile.', fields: { name: 'x' }, requestId: 'r-1' },
      current: { version: 9 },
    }
    stub(answer(412, body))
    const error = await failure(call(sessionApi.get))
    expect(error).toBeInstanceOf(ApiError)
    expect(error).toMatchObject({ code: 'stale_version', fields: { name: 'x' }, requestId: 'r-1', body })
    expect(messageOf(error)).toBe('Saved meanwhile.')
  })

  it('says that the server cannot be reached', async () => {
    stub(new TypeError('fetch failed'))
    expect(await failure(call(sessionApi.get))).toMatchObject({ code: 'offline' })
  })

  it('lets an abort pass as what it is', async () => {
    const controller = new AbortController()
    controller.abort()
    stub(new DOMException('aborted', 'AbortError'))
    const error = await failure(call(sessionApi.get, { signal: controller.signal }))
    expect(error.name).toBe('AbortError')
  })

  it('refuses an answer that does not fit the contract, and a failure without the agreed shape', async () => {
    stub(answer(200, { user: 5 }))
    expect(await failure(call(sessionApi.get))).toMatchObject({ code: 'internal' })
    stub(new Response('<html>', { status: 502 }))
    const error = await failure(call(sessionApi.get))
    expect(error.message).toContain('502')
  })
})
