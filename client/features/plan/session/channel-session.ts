import { ApiError, call, messageOf } from '#client/lib/api-client.ts'
import { createStore, type Store } from '#client/lib/store.ts'
import { channelsApi, staleChannelSchema, type Channel } from '#shared/api/channels.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import {
  createAutosave,
  type Autosave,
  type SaveAnswer,
  type SaveState,
  type Theirs,
} from '../draft/autosave.ts'
import { compareDrafts } from '#shared/design/document-differences.ts'
import { tabId } from '../draft/tab-id.ts'
import {
  forgetUnsaved,
  keepUnsaved,
  readUnsaved,
  sweepUnsaved,
  unsavedKey,
} from '../draft/unsaved-storage.ts'
import { misreadFields } from '../draft/draft-state.ts'
import type { DraftDocument } from '../draft/paths.ts'
import { createPlanSession, type PlanSession } from './plan-session.ts'

export interface ChannelSession extends PlanSession {
  channelId: string
  saving: Store<SaveState>
  autosave: Autosave
  /** Version that the draft is based on. */
  version(): number
  /** Ends a conflict with the other person's version. */
  takeTheirs(): void
}

export interface ChannelPlace {
  workspaceId: string
  projectId: string
  channelId: string
}

const asDraft = (document: DesignDocument): DraftDocument => ({ ...document })

const theirsOf = (channel: Channel): Theirs => ({
  document: asDraft(channel.document),
  version: channel.version,
  by: channel.updatedBy?.name ?? 'Somebody',
  at: channel.updatedAt,
})

const sessions = new Map<string, ChannelSession>()

/**
 * The draft of a channel with its autosave; one per channel for as long as the page lives, so that undo survives a
 * visit to another page. A channel that changed on the server meanwhile is taken over, unless something of ours waits:
 * then the conflict shows with the next save, and nothing is overwritten.
 */
export function channelSession(
  channel: Channel,
  place: ChannelPlace,
  onSaved: (channel: Channel) => void,
): ChannelSession {
  const known = sessions.get(channel.id)
  if (known) {
    const { kind } = known.saving.get()
    if (kind === 'saved' && channel.version > known.version()) {
      known.autosave.stop()
      sessions.delete(channel.id)
    } else return known
  }
  const session = open(channel, place, onSaved)
  sessions.set(channel.id, session)
  return session
}

function open(channel: Channel, place: ChannelPlace, onSaved: (channel: Channel) => void): ChannelSession {
  sweepUnsaved(localStorage)
  const key = unsavedKey(channel.id, tabId())
  const unsaved = readUnsaved(localStorage, key)
  // What the server has by now, as on a save while the page was being left, does not wait any more.
  const waiting =
    unsaved?.document && compareDrafts(unsaved.document, asDraft(channel.document)).length > 0
      ? { ...unsaved, document: unsaved.document }
      : null
  const overtaken = waiting !== null && (waiting.conflict || waiting.version < channel.version)
  const session = createPlanSession(asDraft(channel.document), unsaved?.typed)
  const saving = createStore<SaveState>({ kind: 'saved', at: channel.updatedAt })
  let version = waiting?.version ?? channel.version
  let stored = session.draft.getState().document

  const isConflict = () => saving.get().kind === 'conflict'

  /** What the server does not have stays in this browser until it has it. */
  const keep = () => {
    const { document, typed } = session.draft.getState()
    const waits = document === stored ? null : document
    if (waits === null && misreadFields(typed).length === 0) forgetUnsaved(localStorage, key)
    else keepUnsaved(localStorage, key, { document: waits, typed, version, conflict: isConflict() })
  }

  const autosave = createAutosave({
    version,
    savedAt: channel.updatedAt,
    conflict: overtaken ? theirsOf(channel) : null,
    async send(document, base) {
      const answer = await send(document, base, place, onSaved)
      if (answer.kind === 'saved') stored = document
      return answer
    },
    onState: (state) => {
      saving.set(state)
      // While more is to come, the change itself has just been kept.
      if (state.kind !== 'waiting') keep()
    },
    onVersion: (next) => {
      version = next
      keep()
    },
  })

  let last = stored
  session.draft.subscribe(() => {
    const { document } = session.draft.getState()
    keep()
    if (document === last) return
    last = document
    autosave.change(document)
  })
  // What could not be sent before the page was closed comes back as an edit of its own.
  if (waiting)
    session.draft.dispatch({
      type: 'replace',
      document: waiting.document,
      label: 'What was not saved before',
    })

  window.addEventListener('online', () => void autosave.flush())
  window.addEventListener('pagehide', () => void autosave.flush())
  return {
    ...session,
    channelId: channel.id,
    saving,
    autosave,
    version: () => version,
    takeTheirs() {
      const state = saving.get()
      if (state.kind !== 'conflict') return
      const { document } = state.theirs
      stored = document
      last = document
      // Ours stays one undo away.
      session.draft.dispatch({ type: 'replace', document, label: 'Their version taken' })
      autosave.takeTheirs()
    },
  }
}

async function send(
  document: DraftDocument,
  version: number,
  params: ChannelPlace,
  onSaved: (channel: Channel) => void,
): Promise<SaveAnswer> {
  try {
    // The server reads it by the schema of drafts; what it refuses comes back as an answer.
    const body = { document: document as unknown as { format: 'spandrel-design/1'; name: string } }
    const saved = await call(channelsApi.save, { params, body, version })
    onSaved(saved)
    return { kind: 'saved', version: saved.version, at: saved.updatedAt }
  } catch (error) {
    return toAnswer(error)
  }
}

function toAnswer(error: unknown): SaveAnswer {
  if (!(error instanceof ApiError)) return { kind: 'refused', message: messageOf(error) }
  if (error.code === 'stale_version') {
    const stale = staleChannelSchema.safeParse(error.body)
    if (stale.success) {
      return { kind: 'conflict', theirs: theirsOf(stale.data.current) }
    }
  }
  if (
    error.code === 'offline' ||
    error.code === 'busy' ||
    error.code === 'internal' ||
    error.code === 'rate_limited'
  )
    return { kind: 'offline', message: error.message }
  const fields = Object.entries(error.fields).map(([path, message]) => `${path}: ${message}`)
  return { kind: 'refused', message: [error.message, ...fields].join(' ') }
}
