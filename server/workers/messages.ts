import type { Plan } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import type { NoteContext } from '#shared/note/types.ts'

/** What a worker is asked for. */
export type EngineJob =
  | { kind: 'plan'; document: DesignDocument }
  | { kind: 'note'; document: DesignDocument; context: NoteContext }

export interface EngineAnswers {
  plan: Plan
  /** Bytes of the PDF. */
  note: Uint8Array
}

/** What it answers; an error goes over as text, since its class does not survive the way. */
export type EngineReply =
  { ok: true; value: Plan | Uint8Array } | { ok: false; message: string; stack: string | undefined }
