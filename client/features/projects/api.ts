import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import type { z } from 'zod'
import { projectsApi, type projectCreateSchema, type projectUpdateSchema } from '#shared/api/projects.ts'
import { call } from '#client/lib/api-client.ts'

export const projectsQuery = (workspaceId: string) =>
  queryOptions({
    queryKey: ['projects', workspaceId],
    queryFn: async ({ signal }) =>
      (await call(projectsApi.list, { params: { workspaceId }, signal })).projects,
  })

export const projectQuery = (workspaceId: string, projectId: string) =>
  queryOptions({
    queryKey: ['projects', workspaceId, projectId],
    queryFn: ({ signal }) => call(projectsApi.get, { params: { workspaceId, projectId }, signal }),
  })

/** All changes of projects; each brings the lists up to date. */
export function useProjectChanges(workspaceId: string) {
  const client = useQueryClient()
  const onSuccess = () => client.invalidateQueries({ queryKey: ['projects', workspaceId] })
  const create = useMutation({
    mutationFn: (body: z.input<typeof projectCreateSchema>) =>
      call(projectsApi.create, { params: { workspaceId }, body }),
    onSuccess,
  })
  const update = useMutation({
    mutationFn: (change: { projectId: string; version: number; body: z.input<typeof projectUpdateSchema> }) =>
      call(projectsApi.update, {
        params: { workspaceId, projectId: change.projectId },
        body: change.body,
        version: change.version,
      }),
    onSuccess,
  })
  const remove = useMutation({
    mutationFn: (projectId: string) => call(projectsApi.remove, { params: { workspaceId, projectId } }),
    onSuccess,
  })
  const restore = useMutation({
    mutationFn: (projectId: string) => call(projectsApi.restore, { params: { workspaceId, projectId } }),
    onSuccess,
  })
  return { create, update, remove, restore }
}
