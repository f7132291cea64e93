import { execFileSync } from 'node:child_process'
import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { draftContext } from '#server/features/note/note-context.ts'
import { createEngine } from '#server/lib/create-engine.ts'
import { EnginePool } from '#server/workers/engine-pool.ts'
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
beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

function textOf(pdf: Buffer): string {
  const file = join(server.folder, 'note.pdf')
  writeFileSync(file, pdf)
  return execFileSync('pdftotext', ['-layout', file, '-'], { encoding: 'utf8' })
}

const pageSize = (pdf: Buffer): string => {
  const file = join(server.folder, 'size.pdf')
  writeFileSync(file, pdf)
  return /Page size: +(.*)/.exec(execFileSync('pdfinfo', [file], { encoding: 'utf8' }))?.[1] ?? ''
}

describe('POST /api/note', () => {
  const send = (query = '') =>
    server.bare().post(`/api/note${query}`).send(buildDesign('Cross current, weir 2')).buffer(true)

  it('makes a draft note for a visitor, on the paper that was asked for', async () => {
    const { body, headers } = await send('?paper=Letter').expect(200)
    expect(headers['content-type']).toBe('application/pdf')
    expect(headers['content-disposition']).toBe(
      `attachment; filename="Cross current weir 2 design note.pdf"; filename*=UTF-8''Cross%20current%2C%20weir%202%2C%20design%20note.pdf`,
    )
    const text = textOf(body as Buffer)
    expect(text).toContain('Cross current, weir 2')
    expect(text).toContain('not for manufacture')
    expect(pageSize(body as Buffer)).toContain('letter')
  })

  it('carries the independent check', async () => {
    const text = textOf((await send().expect(200)).body as Buffer)
    expect(text).toContain('Independent check')
    expect(text).toMatch(/Operating point, low\s+end/)
    expect(text).not.toContain('nothing was compared')
  })

  it('is made all the same where the simulator fails, and says so', async () => {
    // A worker that knows nothing of checks refuses the job.
    const silent = new EnginePool({ script: 'engine-worker' })
    const engine = createEngine(false, new EnginePool(), silent)
    const context = draftContext({
      workspaceName: 'Upper Weir',
      authorName: 'Ines Marten',
      date: '2026-01-05',
      paper: 'A4',
      demo: false,
    })
    const bytes = await engine.note(buildDesign(), context)
    expect(textOf(bytes)).toContain('nothing was compared')
    await engine.close()
  })

  it('takes A4 where no paper is named', async () => {
    const { body } = await send().expect(200)
    expect(pageSize(body as Buffer)).toContain('A4')
  })

  it('refuses another paper and a design that cannot be read', async () => {
    await send('?paper=A0').expect(400)
    const { body } = await server.bare().post('/api/note').send({ format: 'spandrel-design/1' }).expect(422)
    expect(body.faults.length).toBeGreaterThan(0)
  })

  it('is limited', async () => {
    const limits = { signIn: 5, wrongPasswords: 5, signUp: 5, plan: 5, note: 1 }
    const limited = await openTestServer({ limits })
    await limited.bare().post('/api/note').send({}).expect(422)
    await limited.bare().post('/api/note').send({}).expect(429)
    await limited.close()
  })
})

describe('the note of a stored channel', () => {
  const open = async (): Promise<{ browser: Browser; workspaceId: string; collection: string }> => {
    const workspaceId = await buildWorkspace(server)
    const { browser } = await buildMember(server, workspaceId, ['engineer'], 'Ines Marten')
    const collection = channelsOf(await buildProject(browser, workspaceId), workspaceId)
    return { browser, workspaceId, collection }
  }

  it('names workspace and author, and is the same file while nothing changed', async () => {
    const { browser, workspaceId, collection } = await open()
    const channel = await buildChannel(browser, collection)
    const address = `/api/workspaces/${workspaceId}/channels/${channel.id}/note.pdf`
    const first = await browser.get(address).buffer(true).expect(200)
    const second = await browser.get(address).buffer(true).expect(200)
    expect(textOf(first.body as Buffer)).toContain('Upper Weir')
    expect(textOf(first.body as Buffer)).toContain('Ines Marten')
    expect((first.body as Buffer).equals(second.body as Buffer)).toBe(true)
  })

  it('is refused with the faults while the draft is not complete', async () => {
    const { browser, workspaceId, collection } = await open()
    const document = { format: 'spandrel-design/1', name: 'Just begun' }
    const { body: channel } = await browser.post(collection).send({ document }).expect(201)
    const { body } = await browser
      .get(`/api/workspaces/${workspaceId}/channels/${channel.id}/note.pdf`)
      .expect(422)
    expect(body.faults.map((fault: { path: string }) => fault.path)).toContain('sensor')
  })
})
