import { describe, expect, it } from 'vitest'
import { endpoints } from '#shared/api/index.ts'
import { actions, isAllowed, permissions, roles, whoMay } from '#shared/api/permissions.ts'

describe('the permissions', () => {
  it('name known roles only, at least one for each action', () => {
    for (const action of actions) {
      expect(permissions[action].length).toBeGreaterThan(0)
      for (const role of permissions[action]) expect(roles).toContain(role)
    }
  })

  it('are each used by a route', () => {
    const used = new Set(endpoints.map((endpoint) => endpoint.access))
    expect(actions.filter((action) => !used.has(action))).toEqual([])
  })

  it('allow nothing to somebody without a role', () => {
    expect(actions.filter((action) => isAllowed([], action))).toEqual([])
  })

  it('let a client of a workspace see none of its designs', () => {
    expect(actions.filter((action) => isAllowed(['client'], action))).toEqual([])
  })

  it('let only engineers change a design', () => {
    for (const action of actions.filter((name) => /^channel\.(create|update|remove)$/.test(name)))
      expect(roles.filter((role) => isAllowed([role], action))).toEqual(['engineer'])
  })

  it('allow what any of several roles allows', () => {
    expect(isAllowed(['reader', 'engineer'], 'channel.update')).toBe(true)
    expect(isAllowed(['reader', 'reviewer'], 'channel.update')).toBe(false)
  })

  it('can be told in words', () => {
    expect(whoMay('channel.update')).toBe('an engineer')
    expect(whoMay('project.create')).toBe('an owner or an engineer')
  })
})
