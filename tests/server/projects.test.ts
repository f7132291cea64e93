import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { buildChannel, buildMember, buildProject, buildWorkspace, channelsOf } from './support/builders.ts'
import { type Browser, openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
let workspaceId: string
let browser: Browser
let collection: string

beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

const open = async (): Promise<void> => {
  workspaceId = await buildWorkspace(server)
  browser = (await buildMember(server, workspaceId, ['engineer'], 'Ines Marten')).browser
  collection = `/api/workspaces/${workspaceId}/projects`
}

describe('projects', () => {
  it('start with version 1 and no channels, and are listed by name', async () => {
    await open()
    const { body, headers } = await browser
      .post(collection)
      .send({ name: '  Weir 2 ', board: 'Board µ', description: 'Rebuilt.\nIn spring.' })
      .expect(201)
    expect(body).toMatchObject({ name: 'Weir 2', board: 'Board µ', description: 'Rebuilt.\nIn spring.' })
    expect(body).toMatchObject({ version: 1, channelCount: 0 })
    expect(headers.etag).toBe('"1"')
    await buildProject(browser, workspaceId, 'Weir 1')
    const listed = await browser.get(collection).expect(200)
    expect(listed.body.projects.map((project: { name: string }) => project.name)).toEqual([
      'Weir 1',
      'Weir 2',
    ])
  })

  it('count their channels', async () => {
    await open()
    const project = await buildProject(browser, workspaceId)
    await buildChannel(browser, channelsOf(project, workspaceId))
    const gone = await buildChannel(browser, channelsOf(project, workspaceId), 'Gone')
    await browser.delete(`${channelsOf(project, workspaceId)}/${gone.id}`).expect(204)
    const { body } = await browser.get(`${collection}/${project.id}`).expect(200)
    expect(body.channelCount).toBe(1)
  })

  it.each([
    ['an empty name', { name: '' }],
    ['no name', { board: 'B' }],
    ['81 characters', { name: 'x'.repeat(81) }],
    ['a control character', { name: 'a\u0000b' }],
    ['half a surrogate pair', { name: 'a\ud800b' }],
    ['a number', { name: 4 }],
    ['an unknown field', { name: 'a', ownerId: 'me' }],
    ['a version of its own', { name: 'a', version: 7 }],
  ])('refuse %s', async (_, body) => {
    await open()
    await browser.post(collection).send(body).expect(400)
    const listed = await browser.get(collection).expect(200)
    expect(listed.body.projects).toEqual([])
  })

  it('change where the version is the one that was read, and say 412 where it is not', async () => {
    await open()
    const project = await buildProject(browser, workspaceId, 'Before')
    const address = `${collection}/${project.id}`
    const { body } = await browser.patch(address).set('If-Match', '"1"').send({ name: 'After' }).expect(200)
    expect(body).toMatchObject({ name: 'After', board: project.board, version: 2 })
    const stale = await browser.patch(address).set('If-Match', '"1"').send({ name: 'Later' }).expect(412)
    expect(stale.body.error.code).toBe('stale_version')
    await browser.patch(address).send({ name: 'Later' }).expect(428)
    await browser.patch(address).set('If-Match', '"2"').send({}).expect(400)
    const now = await browser.get(address).expect(200)
    expect(now.body.name).toBe('After')
  })

  it('go with their channels when deleted and come back with them', async () => {
    await open()
    const project = await buildProject(browser, workspaceId)
    const channel = await buildChannel(browser, channelsOf(project, workspaceId))
    const address = `${collection}/${project.id}`
    await browser.delete(address).expect(204)
    await browser.get(address).expect(404)
    await browser.get(`${channelsOf(project, workspaceId)}/${channel.id}`).expect(404)
    await browser.get(`/api/workspaces/${workspaceId}/channels/${channel.id}/note.pdf`).expect(404)
    expect((await browser.get(collection).expect(200)).body.projects).toEqual([])
    await browser.delete(address).expect(404)
    const { body } = await browser.post(`${address}/restore`).expect(200)
    expect(body).toMatchObject({ id: project.id, channelCount: 1 })
    await browser.get(`${channelsOf(project, workspaceId)}/${channel.id}`).expect(200)
  })
})
