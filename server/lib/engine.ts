import type { Plan } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import type { NoteContext } from '#shared/note/types.ts'

/** The computing that requests ask for. */
export interface Engine {
  /** Throws `design_refused` with the faults. */
  read(design: unknown): DesignDocument
  plan(document: DesignDocument): Promise<Plan>
  /** The plan with the independent check at the candidate that it chose. */
  checkedPlan(document: DesignDocument): Promise<Plan>
  /** Plans and checks the design and makes its note, a PDF. */
  note(document: DesignDocument, context: NoteContext): Promise<Buffer>
  /** True on a demonstration server: notes say that names and figures are invented. */
  readonly isDemo: boolean
  close(): Promise<void>
}
