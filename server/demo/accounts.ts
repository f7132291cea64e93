import type { Role } from '#shared/api/permissions.ts'

/** Every account of the demonstration has it; the demonstration does not run in production. */
export const demoPassword = 'sluice-gate-and-heron'

export const quellmoor = { id: 'quellmoor', name: 'Quellmoor Hydrometry', prefix: 'QH' } as const
export const sedgeworth = { id: 'sedgeworth', name: 'Sedgeworth Instruments', prefix: 'SI' } as const

interface DemoAccount {
  id: string
  email: string
  name: string
  says: string
  memberships: { workspaceId: string; roles: Role[] }[]
}

const at = (workspace: { id: string }, ...roles: Role[]) => ({ workspaceId: workspace.id, roles })

export const demoAccounts: DemoAccount[] = [
  {
    id: 'demo-engineer',
    email: 'engineer@quellmoor.example',
    name: 'Ines Marten',
    says: 'plans and changes channels',
    memberships: [at(quellmoor, 'engineer')],
  },
  {
    id: 'demo-reviewer',
    email: 'reviewer@quellmoor.example',
    name: 'Mats Fenwater',
    says: 'reads and comments',
    memberships: [at(quellmoor, 'reviewer')],
  },
  {
    id: 'demo-technician',
    email: 'technician@quellmoor.example',
    name: 'Tove Ried',
    says: 'reads what is to be measured',
    memberships: [at(quellmoor, 'technician')],
  },
  {
    id: 'demo-reader',
    email: 'reader@quellmoor.example',
    name: 'Ada Holm',
    says: 'reads and prints',
    memberships: [at(quellmoor, 'reader')],
  },
  {
    id: 'demo-owner',
    email: 'owner@quellmoor.example',
    name: 'Jonna Quell',
    says: 'keeps the workspace and its projects',
    memberships: [at(quellmoor, 'owner')],
  },
  {
    id: 'demo-client',
    email: 'client@quellmoor.example',
    name: 'Per Brook',
    says: 'client of Sedgeworth Instruments, sees only what was bought',
    memberships: [at(sedgeworth, 'client')],
  },
  {
    id: 'demo-consultant',
    email: 'consultant@sedgeworth.example',
    name: 'Runa Sedge',
    says: 'owner and engineer of Sedgeworth Instruments',
    memberships: [at(sedgeworth, 'owner', 'engineer')],
  },
]
