import type { DraftDocument } from './paths.ts'

/** What the title block says about saving. */
export type SaveState =
  | { kind: 'saved'; at: string }
  | { kind: 'waiting' }
  | { kind: 'saving' }
  /** The server cannot be reached; typing goes on and is sent later. */
  | { kind: 'offline'; since: string; message: string }
  /** Saving was refused: the message says why. Nothing is lost here. */
  | { kind: 'refused'; message: string }
  /** Somebody else saved first. */
  | { kind: 'conflict'; theirs: Theirs }

/** The channel as another person left it. */
export interface Theirs {
  document: DraftDocument
  version: number
  by: string
  at: string
}

export type SaveAnswer =
  | { kind: 'saved'; version: number; at: string }
  | { kind: 'conflict'; theirs: Theirs }
  | { kind: 'offline'; message: string }
  | { kind: 'refused'; message: string }

export interface AutosaveOptions {
  version: number
  savedAt: string
  /** What somebody else saved before this page began, where work of ours from before still waits. */
  conflict?: Theirs | null
  /** Sends one document, based on one version. Never throws: what went wrong is an answer. */
  send(document: DraftDocument, version: number): Promise<SaveAnswer>
  onState(state: SaveState): void
  /** The version that the draft is now based on, for what is kept in this browser. */
  onVersion?(version: number): void
  now?: () => Date
  /** Pause after the last keystroke, ms. */
  pause?: number
}

export interface Autosave {
  change(document: DraftDocument): void
  /** Sends at once what waits: on leaving the page, on coming back online. */
  flush(): Promise<void>
  /** Ends a conflict: send ours over theirs. */
  keepMine(): void
  /** Ends a conflict: theirs is now the base; nothing of ours waits any more. */
  takeTheirs(): void
  stop(): void
}

/** Waits between tries without connection, ms; the last one repeats. */
const RETRIES = [2000, 4000, 8000, 15000, 30000]

/**
 * Saves a draft as it is typed: one request at a time, always the newest document, always with the version that it
 * was based on. Without connection it goes on trying; in a conflict it sends nothing until a person has decided.
 */
export function createAutosave(options: AutosaveOptions): Autosave {
  const { send, onState, pause = 600, now = () => new Date() } = options
  let version = options.version
  let pending: DraftDocument | null = null
  let sending: Promise<void> | null = null
  let conflict: Theirs | null = options.conflict ?? null
  let tries = 0
  let offlineSince: string | null = null
  let timer: ReturnType<typeof setTimeout> | undefined
  let stopped = false

  const state = (next: SaveState) => {
    if (!stopped) onState(next)
  }

  const later = (delay: number) => {
    clearTimeout(timer)
    timer = setTimeout(() => void run(), delay)
  }

  const run = async (): Promise<void> => {
    if (sending) return sending
    if (pending === null || conflict) return
    const document = pending
    pending = null
    clearTimeout(timer)
    if (offlineSince === null) state({ kind: 'saving' })
    sending = send(document, version).then((answer) => {
      sending = null
      take(answer, document)
    })
    return sending
  }

  const take = (answer: SaveAnswer, document: DraftDocument) => {
    if (answer.kind === 'saved') {
      version = answer.version
      options.onVersion?.(version)
      tries = 0
      offlineSince = null
      if (pending === null) state({ kind: 'saved', at: answer.at })
      else later(0)
      return
    }
    // Not stored: this document waits again, unless a newer one already does.
    pending ??= document
    if (answer.kind === 'offline') {
      offlineSince ??= now().toISOString()
      state({ kind: 'offline', since: offlineSince, message: answer.message })
      if (!stopped) later(RETRIES[Math.min(tries, RETRIES.length - 1)] ?? 30000)
      tries += 1
    } else if (answer.kind === 'conflict') {
      // The server did answer. The version stays the one that ours is based on until a person has decided.
      offlineSince = null
      tries = 0
      conflict = answer.theirs
      state({ kind: 'conflict', theirs: answer.theirs })
    } else {
      offlineSince = null
      state({ kind: 'refused', message: answer.message })
    }
  }

  state(conflict ? { kind: 'conflict', theirs: conflict } : { kind: 'saved', at: options.savedAt })

  return {
    change(document) {
      pending = document
      if (conflict) return
      if (offlineSince === null) state({ kind: 'waiting' })
      if (!sending && offlineSince === null) later(pause)
    },
    async flush() {
      clearTimeout(timer)
      await run()
      // What came while the request was under way goes out too.
      if (pending !== null && offlineSince === null) await run()
    },
    keepMine() {
      if (!conflict) return
      version = conflict.version
      conflict = null
      options.onVersion?.(version)
      void run()
    },
    takeTheirs() {
      if (!conflict) return
      version = conflict.version
      const { at } = conflict
      conflict = null
      pending = null
      options.onVersion?.(version)
      state({ kind: 'saved', at })
    },
    stop() {
      clearTimeout(timer)
      stopped = true
    },
  }
}
