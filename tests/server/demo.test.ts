import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { readDesign } from '#shared/design/read.ts'
import { draftDocumentSchema } from '#shared/api/draft-document.ts'
import { roles } from '#shared/api/permissions.ts'
import { demoAccounts, demoPassword } from '#server/demo/accounts.ts'
import { demoProjects } from '#server/demo/projects.ts'
import { seedDemo } from '#server/demo/seed.ts'
import { welcome } from '#server/demo/welcome.ts'
import { Channel } from '#server/entities/channel.ts'
import { Project } from '#server/entities/project.ts'
import { User } from '#server/entities/user.ts'
import { openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
beforeAll(async () => {
  server = await openTestServer()
  await seedDemo(server.db, () => Date.parse('2026-05-01T00:00:00Z'))
})
afterAll(() => server.close())

describe('the demonstration', () => {
  it('signs each of its accounts in with the password that start prints', async () => {
    const text = welcome('http://127.0.0.1:4310', true)
    expect(text).toContain(demoPassword)
    expect(text).toContain('invented')
    for (const { email } of demoAccounts) {
      expect(text).toContain(email)
      const { body } = await server
        .browser()
        .post('/api/session')
        .send({ email, password: demoPassword })
        .expect(200)
      expect(body.workspaces).toHaveLength(1)
    }
  })

  it('has somebody for every role', () => {
    const held = new Set(demoAccounts.flatMap(({ memberships }) => memberships.flatMap((m) => m.roles)))
    expect([...held].toSorted()).toEqual([...roles].toSorted())
  })

  it('is filled in once: a second start changes nothing and brings nothing back', async () => {
    const counts = () => Promise.all([User, Project, Channel].map((entity) => server.db.read.count(entity)))
    await server.db.write((manager) => manager.delete(Channel, { id: 'conductivity' }))
    const before = await counts()
    await seedDemo(server.db, () => Date.now())
    expect(await counts()).toEqual(before)
  })

  it('says nothing of itself where it is off', () => {
    expect(welcome('http://127.0.0.1:4310', false)).not.toContain('@')
  })
})

const channels = demoProjects.flatMap((project) => project.channels)

describe.each(channels.map((channel) => [channel.document.name, channel] as const))(
  'the channel %s of the demonstration',
  (_, { document }) => {
    it('is a valid design and a valid draft', () => {
      expect(readDesign(document)).toMatchObject({ ok: true })
      expect(draftDocumentSchema.safeParse(document).success).toBe(true)
    })

    it('has an arrangement that works', () => {
      const plan = planDesign(document)
      expect(plan.chosen === null ? undefined : plan.candidates[plan.chosen]).toMatchObject({
        feasible: true,
      })
    })
  },
)
