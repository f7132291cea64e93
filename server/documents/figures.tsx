import type { Plan } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { layoutLevelDiagram } from '#shared/drawings/level-diagram.ts'
import { noteMeasures } from '#shared/drawings/level-scale.ts'
import type { Note } from '#shared/note/types.ts'
import type { NoteFigures } from './note-document.tsx'
import { Drawing } from './shapes.tsx'
import { BLOCK_WIDTH } from './theme.ts'

/** px of a drawing that fills the text block: 176.7 mm at 96 px an inch. */
const BLOCK_PX = 668

interface FiguresInput {
  document: DesignDocument
  plan: Plan
  note: Note
}

export function drawFigures({ document, note }: FiguresInput): NoteFigures {
  const { quantity } = document.sensor
  return { levels: drawLevels(note, quantity, document.rules?.room), schematic: null, transfer: null }
}

function drawLevels(note: Note, quantity: DesignDocument['sensor']['quantity'], rule: number | undefined) {
  if (!note.first.levels) return null
  const { levels } = note.first.levels
  const drawing = layoutLevelDiagram(levels, {
    mode: 'share',
    worst: true,
    quantity,
    measures: noteMeasures(levels.length, BLOCK_PX),
    ...(rule === undefined ? {} : { rule }),
  })
  return (
    <Drawing
      shapes={drawing.shapes}
      box={{ x: 0, y: 0, width: Math.max(drawing.width, BLOCK_PX), height: drawing.height }}
      width={BLOCK_WIDTH}
    />
  )
}
