import type { BudgetLine, Improvement } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { partClasses } from '#shared/parts/classes.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Change } from '../draft/draft-state.ts'
import { getAt, type DraftDocument } from '../draft/paths.ts'
import { fieldAt } from '../form/introspect.ts'

/** A change that one control takes, with its words. */
export interface Taking {
  words: string
  label: string
  changes: Change[]
}

/**
 * What has to be typed for an improvement: the class of parts that keeps the limit with all its figures, or else the
 * limit itself in the field that sets it. Null where no field of the design sets the line.
 */
export function takingOf(
  improvement: Improvement,
  line: BudgetLine,
  design: Design,
  sensorKind: string,
): Taking | null {
  const { path } = line
  if (path === null) return null
  if (improvement.part) {
    const changes = changesToClass(improvement.part.name, path, design)
    if (changes.length > 0)
      return { words: `Take a ${improvement.part.name}`, label: improvement.part.name, changes }
  }
  if (improvement.needed === null || improvement.needed <= 0 || line.limit <= 0) return null
  const field = fieldOf(path, sensorKind)
  const present = getAt(design as unknown as DraftDocument, path)
  if (!field || typeof present !== 'number' || present <= 0) return null
  const value = tightened(path, field.unit, present, improvement.needed / line.limit)
  const shown = formatQuantity(value, field.unit, { digits: 3, display: field.display })
  return {
    words: `Set ${lowered(field.label)} to ${shown}`,
    label: field.label,
    changes: [{ path, value }],
  }
}

function fieldOf(path: string, sensorKind: string) {
  try {
    const field = fieldAt(path, sensorKind)
    return field.control === 'number' ? field : null
  } catch {
    return null
  }
}

/** The figure of a field with which its error is `share` of what it is, to two digits on the safe side. */
function tightened(path: string, unit: string, present: number, share: number): number {
  if (unit === 'dB') return Math.ceil(present - 20 * Math.log10(share))
  if (path.endsWith('.a0')) return rounded(present / share, Math.ceil)
  return rounded(present * share, Math.floor)
}

function rounded(value: number, towards: (x: number) => number): number {
  const power = 10 ** (Math.floor(Math.log10(value)) - 1)
  return Number((towards(value / power + (towards === Math.floor ? 1e-9 : -1e-9)) * power).toPrecision(2))
}

/** Every figure of a class of parts that is better than the one in the design; none that would be worse. */
function changesToClass(name: string, path: string, design: Design): Change[] {
  const found = partClasses.find((one) => one.name === name)
  const keys = path.split('.')
  const base = keys.slice(0, -1).join('.')
  const group = keys.at(-2)
  return Object.entries(found?.limits ?? {}).flatMap(([id, limit]): Change[] => {
    const [owner, key] = id.split('.')
    if (owner !== group || key === undefined) return []
    const at = `${base}.${key}`
    const present = getAt(design as unknown as DraftDocument, at)
    // Gains are kept as errors among the classes, rejection as a ratio.
    const value = key === 'cmrr' ? Math.round(-20 * Math.log10(limit)) : key === 'a0' ? 1 / limit : limit
    const more = key === 'cmrr' || key === 'a0'
    if (typeof present !== 'number' || (more ? value <= present : value >= Math.abs(present))) return []
    return [{ path: at, value }]
  })
}

const lowered = (label: string): string => label.charAt(0).toLowerCase() + label.slice(1)
