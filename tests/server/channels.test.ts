import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { type Channel, channelsPerProject } from '#shared/api/channels.ts'
import {
  buildChannel,
  buildDesign,
  buildMember,
  buildProject,
  buildWorkspace,
  channelsOf,
} from './support/builders.ts'
import { type Browser, openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
let browser: Browser
let second: Browser
let collection: string
let order: string

beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

beforeEach(async () => {
  const workspaceId = await buildWorkspace(server)
  browser = (await buildMember(server, workspaceId, ['engineer'], 'Ines Marten')).browser
  second = (await buildMember(server, workspaceId, ['engineer'], 'Tove Ried')).browser
  const project = await buildProject(browser, workspaceId)
  collection = channelsOf(project, workspaceId)
  order = collection.replace(/channels$/, 'channel-order')
})

const list = async (): Promise<Channel[]> =>
  (await browser.get(collection).expect(200)).body.channels as Channel[]
const names = async (): Promise<string[]> => (await list()).map((channel) => channel.name)

describe('a channel', () => {
  it('keeps its design document exactly as it was sent', async () => {
    const document = buildDesign('Strömung µ Ω °')
    const { body, headers } = await browser.post(collection).send({ document, group: 'Mast' }).expect(201)
    expect(body).toMatchObject({ number: 1, position: 0, group: 'Mast', name: 'Strömung µ Ω °', version: 1 })
    expect(body.updatedBy.name).toBe('Ines Marten')
    expect(headers.etag).toBe('"1"')
    const read = await browser.get(`${collection}/${body.id}`).expect(200)
    expect(JSON.stringify(read.body.document)).toBe(JSON.stringify(document))
  })

  it('answers with the keys of the contract and no others', async () => {
    const channel = await buildChannel(browser, collection)
    const { body } = await browser.get(`${collection}/${channel.id}`).expect(200)
    expect(Object.keys(body).sort()).toEqual(
      [
        'createdAt',
        'document',
        'group',
        'id',
        'name',
        'number',
        'position',
        'updatedAt',
        'updatedBy',
        'version',
      ].sort(),
    )
    expect(Object.keys(body.updatedBy).sort()).toEqual(['id', 'name'])
  })

  it('takes the lowest free number, or one that is asked for and free', async () => {
    await buildChannel(browser, collection, 'A')
    const { body } = await browser
      .post(collection)
      .send({ document: buildDesign('B'), number: 7 })
      .expect(201)
    expect(body.number).toBe(7)
    expect((await buildChannel(browser, collection, 'C')).number).toBe(2)
    const taken = await browser
      .post(collection)
      .send({ document: buildDesign('D'), number: 7 })
      .expect(409)
    expect(taken.body.error.fields.number).toContain('Free next: 3')
  })

  it('may be a draft in which required keys are still missing', async () => {
    const document = { format: 'spandrel-design/1', name: 'Just begun', sensor: { kind: 'voltage' } }
    const { body } = await browser.post(collection).send({ document }).expect(201)
    expect(body.document).toEqual(document)
  })

  it.each([
    ['no name', { format: 'spandrel-design/1' }, 'document.name'],
    ['another format', { format: 'spandrel-design/9', name: 'x' }, 'document.format'],
    ['an unknown key', { ...buildDesign(), colour: 'red' }, 'document'],
    ['a key deep inside', { ...buildDesign(), rails: { positive: 5, middle: 2 } }, 'document.rails'],
    ['a number as text', { ...buildDesign(), rails: { positive: '5' } }, 'document.rails.positive'],
    ['a number out of range', { ...buildDesign(), rails: { positive: 1e9 } }, 'document.rails.positive'],
    [
      'a control character in the notes',
      { ...buildDesign(), notes: { why: 'a\u0007' } },
      'document.notes.why',
    ],
    ['notes without end', { ...buildDesign(), notes: nested(40) }, ''],
  ])('refuses a document with %s and stores nothing', async (_, document, field) => {
    const { body } = await browser.post(collection).send({ document }).expect(400)
    const fields = Object.keys(body.error.fields)
    expect(fields.some((path) => path.startsWith(field))).toBe(true)
    expect(await list()).toEqual([])
  })

  it('refuses keys that would reach into the prototype of objects', async () => {
    for (const key of ['__proto__', 'constructor', 'prototype']) {
      const text = JSON.stringify({ document: buildDesign() }).replace(
        '"name"',
        `"notes":{"${key}":{"polluted":1}},"name"`,
      )
      await browser.post(collection).set('Content-Type', 'application/json').send(text).expect(400)
    }
    expect(({} as { polluted?: number }).polluted).toBeUndefined()
  })

  it('refuses numbers that JSON can write but nobody can mean', async () => {
    const text = JSON.stringify({ document: buildDesign() }).replace('"positive":5', '"positive":1e400')
    await browser.post(collection).set('Content-Type', 'application/json').send(text).expect(400)
  })

  it('is copied behind its original, under a new name and number', async () => {
    const first = await buildChannel(browser, collection, 'Level')
    await buildChannel(browser, collection, 'Flow')
    const { body } = await browser.post(`${collection}/${first.id}/copy`).send({}).expect(201)
    expect(body).toMatchObject({ name: 'Level, copy', number: 3, position: 1, version: 1 })
    expect(body.document.name).toBe('Level, copy')
    await browser.post(`${collection}/${first.id}/copy`).send({}).expect(201)
    await browser.post(`${collection}/${first.id}/copy`).send({ name: 'Spare' }).expect(201)
    expect(await names()).toEqual(['Level', 'Spare', 'Level, copy 2', 'Level, copy', 'Flow'])
  })

  it('is renamed in its document as well', async () => {
    const channel = await buildChannel(browser, collection, 'Level')
    const { body } = await browser
      .patch(`${collection}/${channel.id}`)
      .set('If-Match', '"1"')
      .send({ name: 'Upper level', group: 'Weir', number: 12 })
      .expect(200)
    expect(body).toMatchObject({ name: 'Upper level', group: 'Weir', number: 12, version: 2 })
    expect(body.document).toEqual({ ...channel.document, name: 'Upper level' })
  })

  it('cannot take a number that another channel has', async () => {
    await buildChannel(browser, collection, 'One')
    const two = await buildChannel(browser, collection, 'Two')
    const address = `${collection}/${two.id}`
    await browser.patch(address).set('If-Match', '"1"').send({ number: 1 }).expect(409)
    await browser.patch(address).set('If-Match', '"1"').send({ number: 2, group: 'Mast' }).expect(200)
  })

  it('goes from the list when deleted and comes back to its place', async () => {
    const first = await buildChannel(browser, collection, 'One')
    await buildChannel(browser, collection, 'Two')
    const address = `${collection}/${first.id}`
    await browser.delete(address).expect(204)
    expect(await names()).toEqual(['Two'])
    await browser.get(address).expect(404)
    await browser.put(address).set('If-Match', '"2"').send({ document: buildDesign() }).expect(404)
    const { body } = await browser.post(`${address}/restore`).expect(200)
    expect(body).toMatchObject({ number: 1, name: 'One', document: first.document })
    expect(await names()).toEqual(['One', 'Two'])
    await browser.post(`${address}/restore`).expect(200)
  })

  it('takes the lowest free number when its own was given away meanwhile', async () => {
    const first = await buildChannel(browser, collection, 'One')
    await browser.delete(`${collection}/${first.id}`).expect(204)
    expect((await buildChannel(browser, collection, 'New')).number).toBe(1)
    const { body } = await browser.post(`${collection}/${first.id}/restore`).expect(200)
    expect(body.number).toBe(2)
  })
})

describe('the order of channels', () => {
  it('is the one that was sent, and the numbers stay', async () => {
    const a = await buildChannel(browser, collection, 'A')
    const b = await buildChannel(browser, collection, 'B')
    const c = await buildChannel(browser, collection, 'C')
    const { body } = await browser
      .put(order)
      .send({ order: [c.id, a.id, b.id] })
      .expect(200)
    expect((body.channels as Channel[]).map(({ name, number }) => [name, number])).toEqual([
      ['C', 3],
      ['A', 1],
      ['B', 2],
    ])
    expect(await names()).toEqual(['C', 'A', 'B'])
  })

  it('is refused where a channel is missing, doubled or unknown', async () => {
    const a = await buildChannel(browser, collection, 'A')
    const b = await buildChannel(browser, collection, 'B')
    for (const wrong of [[a.id], [a.id, a.id], [a.id, b.id, 'unknown-channel'], [a.id, 'unknown-channel']])
      await browser.put(order).send({ order: wrong }).expect(409)
    expect(await names()).toEqual(['A', 'B'])
  })
})

describe('saving a draft', () => {
  const save = (who: Browser, channel: Channel, version: string | null, name: string) => {
    const request = who.put(`${collection}/${channel.id}`)
    if (version !== null) request.set('If-Match', version)
    return request.send({ document: buildDesign(name) })
  }

  it('raises the version by one each time', async () => {
    const channel = await buildChannel(browser, collection)
    const { body, headers } = await save(browser, channel, '"1"', 'Second').expect(200)
    expect(body).toMatchObject({ version: 2, name: 'Second' })
    expect(headers.etag).toBe('"2"')
    expect((await save(browser, channel, '"2"', 'Third').expect(200)).body.version).toBe(3)
  })

  it('needs the version that it changes', async () => {
    const channel = await buildChannel(browser, collection)
    const { body } = await save(browser, channel, null, 'x').expect(428)
    expect(body.error.code).toBe('version_required')
  })

  it.each(['1', '*', 'W/"1"', '"1", "2"', '"one"', '""', '"-1"'])(
    'does not take %s for a version',
    async (version) => {
      const channel = await buildChannel(browser, collection)
      await save(browser, channel, version, 'x').expect(400)
    },
  )

  it('overwrites nothing: a second editor is told what stands there now, from whom and since when', async () => {
    const channel = await buildChannel(browser, collection, 'Level')
    const saved = (await save(second, channel, '"1"', 'Level by the second').expect(200)).body as Channel
    const { body } = await save(browser, channel, '"1"', 'Level by the first').expect(412)
    expect(body.error.code).toBe('stale_version')
    expect(body.error.message).toContain('Tove Ried')
    expect(body.current).toEqual(saved)
    expect(await names()).toEqual(['Level by the second'])
  })

  it('lets exactly one of two win that come at once', async () => {
    const channel = await buildChannel(browser, collection)
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, index) =>
        save(index % 2 ? browser : second, channel, '"1"', `Try ${index}`),
      ),
    )
    expect(answers.map(({ status }) => status).toSorted()).toEqual([200, ...Array(7).fill(412)])
    const winner = answers.find(({ status }) => status === 200)?.body as Channel
    expect(await list()).toMatchObject([{ version: 2, name: winner.name }])
  })

  it('loses no change when two people each retry with the version they are told', async () => {
    const channel = await buildChannel(browser, collection, '0')
    const addOne = async (who: Browser): Promise<void> => {
      let current = (await who.get(`${collection}/${channel.id}`).expect(200)).body as Channel
      for (;;) {
        const next = String(Number(current.name) + 1)
        const answer = await save(who, channel, `"${current.version}"`, next)
        if (answer.status === 200) return
        expect(answer.status).toBe(412)
        current = answer.body.current as Channel
      }
    }
    const rounds = async (who: Browser): Promise<void> => {
      for (let round = 0; round < 15; round += 1) await addOne(who)
    }
    await Promise.all([rounds(browser), rounds(second)])
    expect(await list()).toMatchObject([{ name: '30', version: 31 }])
  })
})

describe('a project', () => {
  it(`holds ${channelsPerProject} channels and says so at the next`, async () => {
    for (let count = 0; count < channelsPerProject; count += 1)
      await buildChannel(browser, collection, `C${count}`)
    const { body } = await browser.post(collection).send({ document: buildDesign() }).expect(409)
    expect(body.error.message).toContain(String(channelsPerProject))
    const [first] = await list()
    await browser.post(`${collection}/${first?.id}/copy`).send({}).expect(409)
  })
})

function nested(depth: number): Record<string, unknown> {
  return depth === 0 ? {} : { inner: nested(depth - 1) }
}
