import type { Channel as ChannelAnswer } from '#shared/api/channels.ts'
import type { Channel } from '#server/entities/channel.ts'

/** `channel.updatedBy` must be loaded. */
export function presentChannel(channel: Channel): ChannelAnswer {
  return {
    id: channel.id,
    number: channel.number,
    position: channel.position,
    group: channel.group,
    name: channel.document.name,
    document: channel.document,
    version: channel.version,
    createdAt: channel.createdAt,
    updatedAt: channel.updatedAt,
    updatedBy: channel.updatedBy && { id: channel.updatedBy.id, name: channel.updatedBy.name },
  }
}
