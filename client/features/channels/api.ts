import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import type { z } from 'zod'
import {
  channelsApi,
  type Channel,
  type channelCreateSchema,
  type channelUpdateSchema,
} from '#shared/api/channels.ts'
import { call } from '#client/lib/api-client.ts'

export const channelsQuery = (workspaceId: string, projectId: string) =>
  queryOptions({
    queryKey: ['channels', workspaceId, projectId],
    queryFn: async ({ signal }) =>
      (await call(channelsApi.list, { params: { workspaceId, projectId }, signal })).channels,
  })

/** All changes of the channels of a project; each brings the lists up to date. */
export function useChannelChanges(workspaceId: string, projectId: string) {
  const client = useQueryClient()
  const inProject = { workspaceId, projectId }
  const onSuccess = () =>
    Promise.all([
      client.invalidateQueries({ queryKey: ['channels', workspaceId, projectId] }),
      client.invalidateQueries({ queryKey: ['projects', workspaceId] }),
    ])
  const create = useMutation({
    mutationFn: (body: z.input<typeof channelCreateSchema>) =>
      call(channelsApi.create, { params: inProject, body }),
    onSuccess,
  })
  const copy = useMutation({
    mutationFn: (channel: Channel) =>
      call(channelsApi.copy, { params: { ...inProject, channelId: channel.id }, body: {} }),
    onSuccess,
  })
  const update = useMutation({
    mutationFn: (change: { channel: Channel; body: z.input<typeof channelUpdateSchema> }) =>
      call(channelsApi.update, {
        params: { ...inProject, channelId: change.channel.id },
        body: change.body,
        version: change.channel.version,
      }),
    onSuccess,
  })
  const remove = useMutation({
    mutationFn: (channel: Channel) =>
      call(channelsApi.remove, { params: { ...inProject, channelId: channel.id } }),
    onSuccess,
  })
  const restore = useMutation({
    mutationFn: (channelId: string) => call(channelsApi.restore, { params: { ...inProject, channelId } }),
    onSuccess,
  })
  return { create, copy, update, remove, restore }
}
