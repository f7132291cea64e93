import type { Design } from './schema.ts'

/** Which arrangement a person asks for: by its id, or stage by stage. */
export function askedArrangement(design: Design): string | undefined {
  const { arrangement, stages } = design.choose
  if (arrangement !== undefined) return arrangement
  const [first, second] = (['S1', 'S2'] as const).map(
    (ref) => stages?.find((s) => s.ref === ref)?.arrangement,
  )
  return first !== undefined && second !== undefined ? `${first}+${second}` : first
}
