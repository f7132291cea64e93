import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { type Endpoint, toUrl } from '#shared/api/endpoint.ts'
import { endpoints } from '#shared/api/index.ts'
import { isAllowed, roles, type Role } from '#shared/api/permissions.ts'
import { createApp } from '#server/app.ts'
import { readConfig } from '#server/config.ts'
import { createEngine } from '#server/lib/create-engine.ts'
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

let server: TestServer
beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

describe('the routes of the application', () => {
  it('are those of the contracts, each under a permission, and nothing else', () => {
    const app = createApp({
      config: readConfig({ NODE_ENV: 'test', SPANDREL_DATA: server.folder }),
      db: server.db,
      store: server.store,
      engine: createEngine(false),
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

/** A workspace with one project and one channel, and a member with these roles. */
async function buildPlace(held: Role[]): Promise<{ place: Place; member: Browser; engineer: Browser }> {
  const workspaceId = await buildWorkspace(server)
  const { browser: engineer } = await buildMember(server, workspaceId, ['engineer'])
  const project = await buildProject(engineer, workspaceId)
  const channel = await buildChannel(engineer, channelsOf(project, workspaceId))
  const { browser: member } = await buildMember(server, workspaceId, held)
  return { place: { workspaceId, projectId: project.id, channelId: channel.id }, member, engineer }
}

const answersPdf = (endpoint: Endpoint): boolean => endpoint.produces === 'pdf'

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
        const { place, member } = await buildPlace([role])
        const { status, body } = await call(member, endpoint, place)
        if (isAllowed([role], action)) expect(status).toBe(endpoint.status)
        else {
          expect(status).toBe(403)
          expect(body.error.code).toBe('forbidden')
        }
      },
    )

    it('tells somebody who is not signed in to sign in', async () => {
      const { place } = await buildPlace(['reader'])
      const { status, body } = await call(server.browser(), endpoint, place)
      expect(status).toBe(401)
      expect(body.error.code).toBe('not_signed_in')
    })

    it('tells a member of another workspace that there is nothing, and changes nothing', async () => {
      const { place, engineer } = await buildPlace(['reader'])
      const stranger = (await buildPlace(['owner', 'engineer'])).member
      const { status, body } = await call(stranger, endpoint, place)
      expect(status).toBe(404)
      expect(body.error.code).toBe('not_found')
      expect(JSON.stringify(body)).not.toContain(place.workspaceId)
      const { body: listed } = await engineer.get(
        `/api/workspaces/${place.workspaceId}/projects/${place.projectId}/channels`,
      )
      expect(listed.channels).toMatchObject([{ id: place.channelId, version: 1 }])
    })

    it('finds nothing of another workspace under the own one', async () => {
      const { place } = await buildPlace(['reader'])
      const own = await buildPlace(['owner', 'engineer'])
      const hasInner = endpoint.path.includes(':projectId') || endpoint.path.includes(':channelId')
      const { status } = await call(own.member, endpoint, { ...place, workspaceId: own.place.workspaceId })
      if (hasInner) expect(status).toBe(404)
      else expect(status).toBe(endpoint.status)
    })

    it('finds no channel of another project under this one', async () => {
      const { place, member } = await buildPlace(['owner', 'engineer'])
      const other = await buildProject(member, place.workspaceId, 'Other board')
      const isChannelOfProject = endpoint.path.includes(':projectId') && endpoint.path.includes(':channelId')
      const { status } = await call(member, endpoint, { ...place, projectId: other.id })
      if (isChannelOfProject) expect(status).toBe(404)
      else expect(status).not.toBe(500)
    })

    it('takes an address that cannot exist for nothing', async () => {
      const { place, member } = await buildPlace(['owner', 'engineer'])
      for (const odd of ['..%2f..%2fetc%2fpasswd', '%00', 'a'.repeat(200), "x' OR '1'='1"]) {
        const request = await call(member, endpoint, { ...place, workspaceId: odd })
        expect([400, 404]).toContain(request.status)
      }
    })
  },
)

describe('a member with several roles', () => {
  it('may do what any of them allows', async () => {
    const { place, member } = await buildPlace(['reader', 'engineer'])
    await member
      .post(`/api/workspaces/${place.workspaceId}/projects`)
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

describe('a PDF endpoint', () => {
  it('exists for a stored channel', () => {
    expect(memberEndpoints.filter(answersPdf).length).toBe(1)
  })
})
