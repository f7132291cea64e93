import type { IndependentCheck, Plan } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import type { NoteContext } from '#shared/note/types.ts'

/** What a worker is asked for. */
export type EngineJob =
  | { kind: 'plan'; document: DesignDocument }
  | { kind: 'note'; document: DesignDocument; context: NoteContext; check: IndependentCheck | null }
  | { kind: 'check'; document: DesignDocument }

export interface EngineAnswers {
  plan: Plan
  /** Bytes of the PDF. */
  note: Uint8Array
  /** Null where the plan chose nothing. */
  check: IndependentCheck | null
}

/** What it answers; an error goes over as text, since its class does not survive the way. */
export type EngineReply =
  | { ok: true; value: EngineAnswers[keyof EngineAnswers] }
  | { ok: false; message: string; stack: string | undefined }
