import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { type Endpoint, toUrl } from '#shared/api/endpoint.ts'
import { endpoints } from '#shared/api/index.ts'
import { isAllowed, roles, type Role } from '#shared/api/permissions.ts'
import { createApp } from '#server/app.ts'
import { readConfig } from '#server/config.ts'
import { createEngine } from '#server/lib/create-engine.ts'
import type { Engine } from '#server/lib/engine.ts'
import { createLogger } from '#server/lib/logger.ts'
import {
  buildChannel,
  buildDesign,
  buildMember,
  buildProject,
  buildWorkspace,
  channelsOf,
} from './support/builders.ts'
import { type Browser, openTestServer, type TestServer } from './support/test-server.ts'

/** What the router of Express holds, as far as this walk needs it. */
interface Layer {
  route?: { path: string; methods: Record<string, boolean> }
  handle?: { stack?: Layer[] }
}

function registeredRoutes(layers: Layer[]): string[] {
  return layers.flatMap((layer) =>
    layer.route
      ? Object.keys(layer.route.methods).map((method) => `${method.toUpperCase()} ${layer.route?.path}`)
      : registeredRoutes(layer.handle?.stack ?? []),
  )
}

/** What a note holds is no matter here, only who gets one. */
const engine: Engine = {
  ...createEngine(false),
  note: () => Promise.resolve(Buffer.from('%PDF-1.7')),
}

let server: TestServer
let world: World

beforeAll(async () => {
  server = await openTestServer({ engine })
  const workspaceId = await buildWorkspace(server)
  const members = {} as Record<Role, Browser>
  for (const role of roles) members[role] = (await buildMember(server, workspaceId, [role])).browser
  const elsewhere = await buildWorkspace(server, 'Lower Weir')
  const stranger = (await buildMember(server, elsewhere, ['owner', 'engineer'])).browser
  world = { workspaceId, members, elsewhere, stranger }
})
afterAll(() => server.close())

describe('the routes of the application', () => {
  it('are those of the contracts, each under a permission, and nothing else', () => {
    const app = createApp({
      config: readConfig({ NODE_ENV: 'test', SPANDREL_DATA: server.folder }),
      db: server.db,
      store: server.store,
      engine,
      logger: createLogger('silent', () => undefined),
      clock: () => 0,
      pagesFolder: null,
    })
    const routes = registeredRoutes(app.router.stack as unknown as Layer[])
    const declared = endpoints.map(({ method, path }) => `${method} ${path}`)
    expect(routes.toSorted()).toEqual([...declared, 'GET /healthz', 'GET /readyz'].toSorted())
  })
})

interface Place {
  workspaceId: string
  projectId: string
  channelId: string
}

/** A body that each endpoint accepts, so that a refusal can only be one of access. */
const bodies: Record<string, (place: Place) => object> = {
  'POST /api/workspaces/:workspaceId/projects': () => ({ name: 'Another board' }),
  'PATCH /api/workspaces/:workspaceId/projects/:projectId': () => ({ board: 'Board B' }),
  'POST /api/workspaces/:workspaceId/projects/:projectId/channels': () => ({ document: buildDesign() }),
  'PUT /api/workspaces/:workspaceId/projects/:projectId/channel-order': ({ channelId }) => ({
    order: [channelId],
  }),
  'PUT /api/workspaces/:workspaceId/projects/:projectId/channels/:channelId': () => ({
    document: buildDesign(),
  }),
  'PATCH /api/workspaces/:workspaceId/projects/:projectId/channels/:channelId': () => ({ group: 'Mast' }),
  'POST /api/workspaces/:workspaceId/projects/:projectId/channels/:channelId/copy': () => ({}),
}

const memberEndpoints = endpoints.filter((endpoint) => endpoint.access !== 'public')
const keyOf = (endpoint: Endpoint): string => `${endpoint.method} ${endpoint.path}`

function call(browser: Browser, endpoint: Endpoint, place: Place) {
  const names = [...endpoint.path.matchAll(/:([A-Za-z]+)/g)].map(([, name]) => name as keyof Place)
  const url = toUrl(endpoint, Object.fromEntries(names.map((name) => [name, place[name]])))
  const method = endpoint.method.toLowerCase() as 'get' | 'post' | 'put' | 'patch' | 'delete'
  const request = browser[method](url)
  if (endpoint.versioned) request.set('If-Match', '"1"')
  const body = bodies[keyOf(endpoint)]
  return body ? request.send(body(place)) : request
}

/** One workspace with a member of each role, and one with somebody who has nothing to do with the first. */
interface World {
  workspaceId: string
  members: Record<Role, Browser>
  elsewhere: string
  stranger: Browser
}

/** A project with one channel, made for one test. */
async function buildPlace(browser: Browser, workspaceId: string): Promise<Place> {
  const project = await buildProject(browser, workspaceId)
  const channel = await buildChannel(browser, channelsOf(project, workspaceId))
  return { workspaceId, projectId: project.id, channelId: channel.id }
}

const buildOwnPlace = (): Promise<Place> => buildPlace(world.members.engineer, world.workspaceId)

describe.each(memberEndpoints.map((endpoint) => [keyOf(endpoint), endpoint] as const))(
  '%s',
  (key, endpoint) => {
    const action = endpoint.access === 'public' ? null : endpoint.access

    it('has a body in this test exactly where it takes one', () => {
      expect(endpoint.body.safeParse(undefined).success).toBe(!(key in bodies))
    })

    it.each(roles.map((role) => [role] as const))(
      'treats a member who is %s as the permissions say',
      async (role) => {
        if (!action) throw new Error('not an endpoint of a workspace')
        const { status, body } = await call(world.members[role], endpoint, await buildOwnPlace())
        if (isAllowed([role], action)) expect(status).toBe(endpoint.status)
        else {
          expect(status).toBe(403)
          expect(body.error.code).toBe('forbidden')
        }
      },
    )

    it('tells somebody who is not signed in to sign in', async () => {
      const { status, body } = await call(server.browser(), endpoint, await buildOwnPlace())
      expect(status).toBe(401)
      expect(body.error.code).toBe('not_signed_in')
    })

    it('tells a member of another workspace that there is nothing, and changes nothing', async () => {
      const place = await buildOwnPlace()
      const { status, body } = await call(world.stranger, endpoint, place)
      expect(status).toBe(404)
      expect(body.error.code).toBe('not_found')
      expect(JSON.stringify(body)).not.toContain(place.workspaceId)
      const collection = channelsOf({ id: place.projectId }, place.workspaceId)
      const { body: listed } = await world.members.reader.get(collection).expect(200)
      expect(listed.channels).toMatchObject([{ id: place.channelId, version: 1 }])
    })

    it('finds nothing of another workspace under the own one', async () => {
      const foreign = await buildOwnPlace()
      const hasInner = endpoint.path.includes(':projectId') || endpoint.path.includes(':channelId')
      const { status } = await call(world.stranger, endpoint, { ...foreign, workspaceId: world.elsewhere })
      expect(status).toBe(hasInner ? 404 : endpoint.status)
    })

    it('takes an address that cannot exist for nothing', async () => {
      const place = await buildOwnPlace()
      for (const odd of ['../../etc/passwd', '\u0000', 'a'.repeat(200), "x' OR '1'='1"]) {
        const { status } = await call(world.members.engineer, endpoint, { ...place, workspaceId: odd })
        expect([400, 404]).toContain(status)
      }
    })
  },
)

const channelEndpoints = memberEndpoints.filter(
  ({ path }) => path.includes(':projectId') && path.includes(':channelId'),
)

describe.each(channelEndpoints.map((endpoint) => [keyOf(endpoint), endpoint] as const))(
  '%s',
  (_, endpoint) => {
    it('finds no channel of another project under this one', async () => {
      const place = await buildOwnPlace()
      const other = await buildProject(world.members.engineer, world.workspaceId, 'Other board')
      const { status } = await call(world.members.engineer, endpoint, { ...place, projectId: other.id })
      expect(status).toBe(404)
    })
  },
)

describe('a member with several roles', () => {
  it('may do what any of them allows', async () => {
    const { browser } = await buildMember(server, world.workspaceId, ['reader', 'engineer'])
    await browser
      .post(`/api/workspaces/${world.workspaceId}/projects`)
      .send({ name: 'Another board' })
      .expect(201)
  })

  it('loses a right with the next request after the role is taken', async () => {
    const { Membership } = await import('#server/entities/membership.ts')
    const workspaceId = await buildWorkspace(server)
    const { id, browser } = await buildMember(server, workspaceId, ['engineer'])
    await browser.post(`/api/workspaces/${workspaceId}/projects`).send({ name: 'One' }).expect(201)
    await server.db.write((m) => m.update(Membership, { workspaceId, userId: id }, { roles: ['reader'] }))
    await browser.post(`/api/workspaces/${workspaceId}/projects`).send({ name: 'Two' }).expect(403)
    await server.db.write((m) => m.delete(Membership, { workspaceId, userId: id }))
    await browser.get(`/api/workspaces/${workspaceId}/projects`).expect(404)
  })
})
