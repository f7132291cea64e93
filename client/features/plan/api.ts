import { queryOptions } from '@tanstack/react-query'
import { call } from '#client/lib/api-client.ts'
import { channelsApi } from '#shared/api/channels.ts'

/** One channel with its draft. It is loaded afresh at each visit: the draft itself lives in its session. */
export const channelQuery = (workspaceId: string, projectId: string, channelId: string) =>
  queryOptions({
    queryKey: ['channel', workspaceId, projectId, channelId],
    queryFn: ({ signal }) => call(channelsApi.get, { params: { workspaceId, projectId, channelId }, signal }),
    staleTime: 0,
    refetchOnWindowFocus: false,
  })
