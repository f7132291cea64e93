import { paths } from '#client/lib/paths.ts'
import type { PlanPlace } from '../planner-context.tsx'

/** The page that holds the draft against its kept variant. */
export const compareHref = (where: PlanPlace): string =>
  where.kind === 'visitor'
    ? paths.visitorPlan('compare')
    : paths.channelPlan(where.workspaceId, where.projectId, where.channelId, 'compare')

/** Owner of the kept variant: a channel, or null for the visitor's plan. */
export const keptOwner = (where: PlanPlace): string | null =>
  where.kind === 'visitor' ? null : where.channelId
