import type { RequestHandler } from 'express'
import { noteApi } from '#shared/api/note.ts'
import type { NoteContext } from '#shared/note/types.ts'
import type { ChannelService } from '#server/features/channels/channel-service.ts'
import { type Clock, toIso } from '#server/lib/clock.ts'
import type { Engine } from '#server/lib/engine.ts'
import { type FileAnswer, type Handling, handleMember, handlePublic } from '#server/lib/handle.ts'
import { draftContext } from './note-context.ts'

interface Dependencies {
  engine: Engine
  channels: ChannelService
  clock: Clock
  limits: RequestHandler[]
}

export function noteRoutes(handling: Handling, { engine, channels, clock, limits }: Dependencies): void {
  const demo = engine.isDemo

  const build = async (design: unknown, context: NoteContext): Promise<FileAnswer> => {
    const document = engine.read(design)
    return { bytes: await engine.note(document, context), name: `${document.name}, design note.pdf` }
  }

  handlePublic(
    handling,
    noteApi.create,
    ({ body, query }) => {
      const date = toIso(clock()).slice(0, 10)
      return build(
        body,
        draftContext({ workspaceName: 'Visitor', authorName: 'Visitor', date, paper: query.paper, demo }),
      )
    },
    limits,
  )

  handleMember(
    handling,
    noteApi.get,
    async ({ params, query, member }) => {
      const channel = await channels.getInWorkspace(member.workspaceId, params.channelId)
      const authorName = channel.updatedBy?.name ?? ''
      // Of the last change, not of today: the note of an unchanged draft is the same file whenever it is made.
      const date = channel.updatedAt
      const { workspaceName } = member
      return build(
        channel.document,
        draftContext({ workspaceName, authorName, date, paper: query.paper, demo }),
      )
    },
    limits,
  )
}
