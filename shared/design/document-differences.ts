import type { DraftDocument } from './document-paths.ts'

/** One key that differs between two drafts; undefined where a side has none. */
export interface Difference {
  path: string
  mine: unknown
  theirs: unknown
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/** Every key in which two drafts differ, in the order of the document; lists count as one value. */
export function compareDrafts(mine: DraftDocument, theirs: DraftDocument): Difference[] {
  return walk(mine, theirs, '')
}

function walk(mine: unknown, theirs: unknown, path: string): Difference[] {
  if (!isRecord(mine) && !isRecord(theirs))
    return JSON.stringify(mine) === JSON.stringify(theirs) ? [] : [{ path, mine, theirs }]
  if ((mine !== undefined && !isRecord(mine)) || (theirs !== undefined && !isRecord(theirs)))
    return [{ path, mine, theirs }]
  const left = mine ?? {}
  const right = theirs ?? {}
  const keys = [...new Set([...Object.keys(left), ...Object.keys(right)])]
  return keys.flatMap((key) => walk(left[key], right[key], path ? `${path}.${key}` : key))
}
