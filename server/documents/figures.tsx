import type { ReactNode } from 'react'
import { buildNetworkFor } from '#shared/design/plan-design.ts'
import type { Candidate, Plan } from '#shared/design/plan.ts'
import { designSchema, type DesignDocument } from '#shared/design/schema.ts'
import { layoutLevelDiagram } from '#shared/drawings/level-diagram.ts'
import type { Box, Shape } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { noteMeasures } from '#shared/drawings/level-scale.ts'
import { transferOf } from '#shared/drawings/transfer-input.ts'
import { layoutTransferPlot } from '#shared/drawings/transfer-plot.ts'
import type { Note } from '#shared/note/types.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import type { NoteFigures } from './note-document.tsx'
import { Drawing } from './shapes.tsx'
import { BLOCK_WIDTH } from './theme.ts'

/** px of a drawing that fills the text block: 176.7 mm at 96 px an inch. */
const BLOCK_PX = 668
const POINTS_PER_PX = 0.75
/** A schematic higher than this is drawn smaller, so that the first sheet keeps its parts table ... */
const SCHEMATIC_PX = 190
/** ... but not so small that its lettering, which stays at 7 pt, would touch. */
const SMALLEST_SCALE = 0.8

const TRANSFER_PX = 330

interface FiguresInput {
  document: DesignDocument
  plan: Plan
  note: Note
}

type Quantity = DesignDocument['sensor']['quantity']

/** The figures of a note, from the same geometry as on screen. */
export function drawFigures({ document, plan, note }: FiguresInput): NoteFigures {
  const candidate = plan.chosen === null ? null : (plan.candidates[plan.chosen] ?? null)
  const { quantity } = document.sensor
  return {
    levels: note.first.levels ? drawLevels(note.first.levels.levels, quantity, document.rules?.room) : null,
    schematic:
      note.first.schematic && candidate ? drawSchematic(document, candidate, note.meta.symbols) : null,
    transfer: candidate ? drawTransfer(document, candidate) : null,
  }
}

function drawLevels(
  levels: NonNullable<Candidate['levels']>,
  quantity: Quantity,
  rule: number | undefined,
): ReactNode {
  const drawing = layoutLevelDiagram(levels, {
    mode: 'share',
    worst: true,
    quantity,
    measures: { ...noteMeasures(levels.length, BLOCK_PX), column: BLOCK_PX / levels.length, region: 96 },
    ...(rule === undefined ? {} : { rule }),
  })
  const box = enclose({ x: 0, y: 0, width: BLOCK_PX, height: drawing.height }, drawing.shapes)
  return <Drawing shapes={drawing.shapes} box={box} width={BLOCK_WIDTH} />
}

/** Scaled down where it would be wider than the text block or too high; otherwise at its own size. */
function drawSchematic(document: DesignDocument, candidate: Candidate, symbols: 'iec' | 'ansi'): ReactNode {
  const network = buildNetworkFor(document, candidate)
  if (!network) return null
  const drawing = layoutSchematic(network, {
    symbols,
    labels: { VSENSE: document.sensor.quantity.name, converter: `${document.converter.bits} bit` },
  })
  const box = enclose({ x: 0, y: 0, width: drawing.width, height: drawing.height }, drawing.shapes)
  const scale = Math.min(1, BLOCK_PX / box.width, Math.max(SMALLEST_SCALE, SCHEMATIC_PX / box.height))
  return <Drawing shapes={drawing.shapes} box={box} width={box.width * scale * POINTS_PER_PX} />
}

function drawTransfer(document: DesignDocument, candidate: Candidate): ReactNode {
  const { sensor, converter } = designSchema.parse(document)
  const input = transferOf(candidate, sensor.quantity, converter)
  if (!input) return null
  const drawing = layoutTransferPlot(input, { height: TRANSFER_PX })
  const box = enclose({ x: 0, y: 0, width: drawing.width, height: drawing.height }, drawing.shapes)
  return <Drawing shapes={drawing.shapes} box={box} width={box.width * POINTS_PER_PX} />
}

/** Lettering here is a little wider than on screen: the box grows sideways to hold all of it. */
function enclose(box: Box, shapes: readonly Shape[]): Box {
  const texts = shapes.filter((shape) => shape.type === 'text').map((shape) => textBox(shape))
  const slack = (width: number) => width * 0.06
  const left = Math.min(box.x, ...texts.map((t) => t.x - slack(t.width)))
  const right = Math.max(box.x + box.width, ...texts.map((t) => t.x + t.width + slack(t.width)))
  return { ...box, x: left, width: right - left }
}
