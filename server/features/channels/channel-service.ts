import { type EntityManager, IsNull, MoreThan, Not, type QueryDeepPartialEntity } from 'typeorm'
import { channelsPerProject } from '#shared/api/channels.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { AppError } from '#shared/errors.ts'
import { Channel } from '#server/entities/channel.ts'
import { type Clock, toIso } from '#server/lib/clock.ts'
import type { Db } from '#server/lib/db.ts'
import { createId } from '#server/lib/identifier.ts'
import { notFound } from '#server/middleware/membership.ts'
import { findProject } from '#server/features/projects/project-service.ts'
import { presentChannel } from './channel-presenter.ts'

interface ProjectKey {
  workspaceId: string
  projectId: string
}

interface ChannelKey extends ProjectKey {
  channelId: string
}

interface NewChannel {
  document: DesignDocument
  group: string
  number?: number | undefined
}

interface ChannelChange {
  name?: string | undefined
  group?: string | undefined
  number?: number | undefined
}

/** Who changes: written beside each change. */
interface Author {
  id: string
}

const withAuthor = { updatedBy: true }

/** TypeORM's type of a change cannot follow the free-form `notes` of a document; what is stored is plain JSON. */
const toColumns = (fields: Partial<Channel>) => fields as QueryDeepPartialEntity<Channel>

async function findChannel(manager: EntityManager, key: ChannelKey): Promise<Channel> {
  await findProject(manager, key)
  const channel = await manager.findOne(Channel, {
    where: { id: key.channelId, projectId: key.projectId, workspaceId: key.workspaceId, deletedAt: IsNull() },
    relations: withAuthor,
  })
  if (!channel) throw notFound()
  return channel
}

async function listChannels(manager: EntityManager, key: ProjectKey): Promise<Channel[]> {
  await findProject(manager, key)
  return manager.find(Channel, {
    where: { projectId: key.projectId, workspaceId: key.workspaceId, deletedAt: IsNull() },
    relations: withAuthor,
    order: { position: 'ASC', number: 'ASC' },
  })
}

function lowestFree(channels: Channel[]): number {
  const taken = new Set(channels.map((channel) => channel.number))
  let number = 1
  while (taken.has(number)) number += 1
  return number
}

function requireFree(channels: Channel[], number: number): void {
  if (!channels.some((channel) => channel.number === number)) return
  const message = `Number: channel ${number} exists already in this project. Free next: ${lowestFree(channels)}.`
  throw new AppError('conflict', message, { fields: { number: message } })
}

function requireRoom(channels: Channel[]): void {
  if (channels.length >= channelsPerProject)
    throw new AppError(
      'conflict',
      `A project holds at most ${channelsPerProject} channels. Start another project.`,
    )
}

export function createChannelService(db: Db, clock: Clock) {
  const insert = async (
    manager: EntityManager,
    key: ProjectKey,
    author: Author,
    fields: Pick<Channel, 'document' | 'group' | 'number' | 'position'>,
  ): Promise<Channel> => {
    const now = toIso(clock())
    const id = createId()
    const times = { createdAt: now, updatedAt: now, deletedAt: null }
    const place = { workspaceId: key.workspaceId, projectId: key.projectId }
    await manager.insert(
      Channel,
      toColumns({ ...fields, ...place, ...times, id, version: 1, updatedById: author.id }),
    )
    return findChannel(manager, { ...key, channelId: id })
  }

  /** Changes a channel that still stands at `version`; otherwise says how it stands now. */
  const change = async (
    manager: EntityManager,
    key: ChannelKey,
    version: number,
    author: Author,
    fields: Partial<Pick<Channel, 'document' | 'group' | 'number'>>,
  ): Promise<Channel> => {
    const { affected } = await manager.update(
      Channel,
      {
        id: key.channelId,
        projectId: key.projectId,
        workspaceId: key.workspaceId,
        version,
        deletedAt: IsNull(),
      },
      toColumns({ ...fields, version: version + 1, updatedAt: toIso(clock()), updatedById: author.id }),
    )
    const now = await findChannel(manager, key)
    if (affected !== 1) {
      const who = now.updatedBy ? now.updatedBy.name : 'Somebody'
      const message = `${who} saved this channel meanwhile. Nothing was overwritten: compare, then keep one or the other.`
      throw new AppError('stale_version', message, { details: { current: presentChannel(now) } })
    }
    return now
  }

  return {
    async list(key: ProjectKey): Promise<Channel[]> {
      return listChannels(db.read, key)
    },

    async get(key: ChannelKey): Promise<Channel> {
      return findChannel(db.read, key)
    },

    /** By workspace alone, with its project's name. */
    async getInWorkspace(workspaceId: string, channelId: string): Promise<Channel> {
      const channel = await db.read.findOne(Channel, {
        where: { id: channelId, workspaceId, deletedAt: IsNull(), project: { deletedAt: IsNull() } },
        relations: { ...withAuthor, project: true },
      })
      if (!channel) throw notFound()
      return channel
    },

    async create(key: ProjectKey, author: Author, fields: NewChannel): Promise<Channel> {
      return db.write(async (manager) => {
        const channels = await listChannels(manager, key)
        requireRoom(channels)
        if (fields.number !== undefined) requireFree(channels, fields.number)
        const number = fields.number ?? lowestFree(channels)
        const position = (channels.at(-1)?.position ?? -1) + 1
        return insert(manager, key, author, {
          document: fields.document,
          group: fields.group,
          number,
          position,
        })
      })
    },

    async copy(key: ChannelKey, author: Author, name: string | undefined): Promise<Channel> {
      return db.write(async (manager) => {
        const original = await findChannel(manager, key)
        const channels = await listChannels(manager, key)
        requireRoom(channels)
        const { projectId } = key
        const after = { projectId, position: MoreThan(original.position) }
        await manager.increment(Channel, after, 'position', 1)
        const document = { ...original.document, name: name ?? copyName(original.document.name, channels) }
        return insert(manager, key, author, {
          document,
          group: original.group,
          number: lowestFree(channels),
          position: original.position + 1,
        })
      })
    },

    async save(key: ChannelKey, version: number, author: Author, document: DesignDocument): Promise<Channel> {
      return db.write((manager) => change(manager, key, version, author, { document }))
    },

    async update(key: ChannelKey, version: number, author: Author, fields: ChannelChange): Promise<Channel> {
      return db.write(async (manager) => {
        const channel = await findChannel(manager, key)
        const { name, group, number } = fields
        if (number !== undefined && number !== channel.number && version === channel.version)
          requireFree(await listChannels(manager, key), number)
        return change(manager, key, version, author, {
          ...(group === undefined ? {} : { group }),
          ...(number === undefined ? {} : { number }),
          ...(name === undefined ? {} : { document: { ...channel.document, name } }),
        })
      })
    },

    async order(key: ProjectKey, order: string[]): Promise<Channel[]> {
      return db.write(async (manager) => {
        const channels = await listChannels(manager, key)
        const known = new Set(channels.map((channel) => channel.id))
        if (
          new Set(order).size !== order.length ||
          order.length !== known.size ||
          !order.every((id) => known.has(id))
        )
          throw new AppError(
            'conflict',
            'The list of channels changed meanwhile. Read it again, then move the channel.',
          )
        for (const [position, id] of order.entries()) await manager.update(Channel, { id }, { position })
        return listChannels(manager, key)
      })
    },

    async remove(key: ChannelKey): Promise<void> {
      await db.write(async (manager) => {
        const channel = await findChannel(manager, key)
        const deletedAt = toIso(clock())
        await manager.update(Channel, { id: channel.id }, { deletedAt, version: channel.version + 1 })
      })
    },

    /** Undoes `remove`. Where its number was given away meanwhile it takes the lowest free one. */
    async restore(key: ChannelKey): Promise<Channel> {
      return db.write(async (manager) => {
        const { workspaceId, projectId, channelId } = key
        const channels = await listChannels(manager, key)
        const deleted = await manager.findOneBy(Channel, {
          id: channelId,
          projectId,
          workspaceId,
          deletedAt: Not(IsNull()),
        })
        if (deleted) {
          requireRoom(channels)
          const isTaken = channels.some((channel) => channel.number === deleted.number)
          const number = isTaken ? lowestFree(channels) : deleted.number
          await manager.update(
            Channel,
            { id: deleted.id },
            { deletedAt: null, number, version: deleted.version + 1 },
          )
        }
        return findChannel(manager, key)
      })
    },
  }
}

export type ChannelService = ReturnType<typeof createChannelService>

/** "Stilling-well level, copy", then "…, copy 2": no two channels of a project under one name by copying. */
function copyName(name: string, channels: Channel[]): string {
  const base = name.replace(/, copy(?: \d+)?$/, '').slice(0, 108)
  const taken = new Set(channels.map((channel) => channel.document.name))
  let candidate = `${base}, copy`
  for (let count = 2; taken.has(candidate); count += 1) candidate = `${base}, copy ${count}`
  return candidate
}
