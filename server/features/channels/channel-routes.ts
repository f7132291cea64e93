import { channelsApi } from '#shared/api/channels.ts'
import { type Handling, handleMember } from '#server/lib/handle.ts'
import { presentChannel } from './channel-presenter.ts'
import type { ChannelService } from './channel-service.ts'

export function channelRoutes(handling: Handling, service: ChannelService): void {
  handleMember(handling, channelsApi.list, async ({ params }) => ({
    channels: (await service.list(params)).map(presentChannel),
  }))
  handleMember(handling, channelsApi.create, async ({ params, member, body }) =>
    presentChannel(await service.create(params, member.user, body)),
  )
  handleMember(handling, channelsApi.order, async ({ params, body }) => ({
    channels: (await service.order(params, body.order)).map(presentChannel),
  }))
  handleMember(handling, channelsApi.get, async ({ params }) => presentChannel(await service.get(params)))
  handleMember(handling, channelsApi.save, async ({ params, version, member, body }) =>
    presentChannel(await service.save(params, version, member.user, body.document)),
  )
  handleMember(handling, channelsApi.update, async ({ params, version, member, body }) =>
    presentChannel(await service.update(params, version, member.user, body)),
  )
  handleMember(handling, channelsApi.copy, async ({ params, member, body }) =>
    presentChannel(await service.copy(params, member.user, body.name)),
  )
  handleMember(handling, channelsApi.remove, ({ params }) => service.remove(params))
  handleMember(handling, channelsApi.restore, async ({ params }) =>
    presentChannel(await service.restore(params)),
  )
}
