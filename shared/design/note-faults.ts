import type { Fault } from './plan.ts'

/** Levels of lists and objects that notes may be nested. */
const DEEPEST = 32

/**
 * Faults of the free notes: whatever stands there becomes part of the design's hash, so it has to be plain JSON (RFC
 * 8259) of finite numbers and well-formed text, and no deeper than a reader can follow.
 */
export function noteFaults(notes: unknown): Fault[] {
  const faults: Fault[] = []
  const add = (path: string, reason: string, accepted: string) => faults.push({ path, reason, accepted })
  const visit = (value: unknown, path: string, depth: number): void => {
    if (depth > DEEPEST)
      return void add(
        'notes',
        'the notes are nested too deep',
        `at most ${DEEPEST} levels of lists and objects`,
      )
    if (value === null || value === undefined || typeof value === 'boolean') return
    if (typeof value === 'number') {
      if (!Number.isFinite(value))
        add(
          path,
          `the note is ${Number.isNaN(value) ? 'not a number' : 'infinite'}`,
          'a finite number, or text',
        )
    } else if (typeof value === 'string') {
      if (!isWellFormed(value)) add(path, 'the note holds half a character', 'well-formed Unicode text')
    } else if (typeof value === 'object') {
      for (const [key, member] of Object.entries(value)) {
        if (!isWellFormed(key))
          add(path, 'a key of the notes holds half a character', 'well-formed Unicode text')
        visit(member, Array.isArray(value) ? `${path}[${key}]` : `${path}.${key}`, depth + 1)
        if (faults.length > 0) return
      }
    } else
      add(path, `the note is a ${typeof value}`, 'text, a number, true, false, null, a list or an object')
  }
  visit(notes, 'notes', 0)
  return faults
}

/** No lone surrogate: canonical JSON has no form for one. */
const isWellFormed = (text: string): boolean =>
  !/[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/.test(text)
