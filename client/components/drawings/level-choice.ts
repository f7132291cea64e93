import { markNames, type Mark, type MarkName } from '#shared/drawings/level-marks.ts'
import type { LevelBay } from '#shared/drawings/level-diagram.ts'

/** The mark that the arrow keys have reached: a bay and one of its six places. */
export interface Choice {
  bay: number
  name: MarkName
}

export function chosenMark(
  bays: readonly LevelBay[],
  choice: Choice | null,
): { bay: LevelBay; mark: Mark } | null {
  if (!choice) return null
  const bay = bays[choice.bay]
  const mark = bay ? nearest(bay.marks, choice.name) : null
  return bay && mark ? { bay, mark } : null
}

/** Next choice after a key; null where the key does nothing here. */
export function moveChoice(bays: readonly LevelBay[], choice: Choice | null, key: string): Choice | null {
  const steps: Record<string, [bay: number, mark: number]> = {
    ArrowLeft: [-1, 0],
    ArrowRight: [1, 0],
    ArrowUp: [0, -1],
    ArrowDown: [0, 1],
    Home: [-Infinity, 0],
    End: [Infinity, 0],
  }
  const step = steps[key]
  if (!step || bays.length === 0) return null
  if (!choice) return { bay: key === 'End' || key === 'ArrowLeft' ? bays.length - 1 : 0, name: 'high' }
  const bay = Math.min(bays.length - 1, Math.max(0, choice.bay + step[0]))
  const marks = bays[bay]?.marks ?? []
  const at = marks.findIndex((mark) => mark.name === nearest(marks, choice.name)?.name)
  const name = marks[Math.min(marks.length - 1, Math.max(0, at + step[1]))]?.name ?? choice.name
  return { bay, name }
}

/** The mark of that name, or the closest one that is shown. */
function nearest(marks: readonly Mark[], name: MarkName): Mark | null {
  const order = markNames.indexOf(name)
  const distance = (mark: Mark) => Math.abs(markNames.indexOf(mark.name) - order)
  return marks.reduce<Mark | null>(
    (best, mark) => (!best || distance(mark) < distance(best) ? mark : best),
    null,
  )
}

/** The mark closest to a height in the drawing, for the pointer. */
export function markAt(bay: LevelBay, y: number): MarkName | null {
  const best = bay.marks.reduce<Mark | null>(
    (closest, mark) => (!closest || Math.abs(mark.y - y) < Math.abs(closest.y - y) ? mark : closest),
    null,
  )
  return best?.name ?? null
}
