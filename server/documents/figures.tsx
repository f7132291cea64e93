import { View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import { buildNetworkFor } from '#shared/design/plan-design.ts'
import type { Candidate, Level, Plan } from '#shared/design/plan.ts'
import { designSchema, type Design, type DesignDocument } from '#shared/design/schema.ts'
import { layoutLevelDiagram } from '#shared/drawings/level-diagram.ts'
import { layoutCurvePlot } from '#shared/drawings/curve-plot.ts'
import { noisePlot, responsePlot, type NamedPlot } from '#shared/drawings/curve-inputs.ts'
import { errorBars, layoutErrorChart } from '#shared/drawings/error-chart.ts'
import { layoutSpreadPlot } from '#shared/drawings/spread-plot.ts'
import type { Curves, Spread } from '#shared/studies/types.ts'
import type { Box, Shape } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { noteMeasures } from '#shared/drawings/level-scale.ts'
import { transferOf } from '#shared/drawings/transfer-input.ts'
import { layoutTransferPlot } from '#shared/drawings/transfer-plot.ts'
import type { Note, Paper } from '#shared/note/types.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import type { NoteFigures } from './note-document.tsx'
import { Drawing } from './shapes.tsx'
import { BLOCK_WIDTH } from './theme.ts'

/** px of a drawing that fills the text block: 176.7 mm at 96 px an inch. */
const BLOCK_PX = 668
const POINTS_PER_PX = 0.75
/** A schematic higher than this is drawn smaller, so that the first sheet keeps its parts table ... */
const SCHEMATIC_PX = { A4: 190, Letter: 150 } as const
/** ... but not so small that its lettering, which stays at 7 pt, would touch. */
const SMALLEST_SCALE = 0.8

/** Height of the linear region in the level diagram. */
const REGION_PX = { A4: 84, Letter: 76 } as const
const TRANSFER_PX = 330
/** Height of one panel of a curve. */
const PANEL_PX = 130

const NO_FIGURES: NoteFigures = {
  levels: null,
  schematic: null,
  transfer: null,
  errors: null,
  spread: null,
  noise: null,
  response: null,
}

interface FiguresInput {
  document: DesignDocument
  plan: Plan
  note: Note
  spread: Spread | null
  curves: Curves | null
}

/** The figures of a note, from the same geometry as on screen. */
export function drawFigures({ document, plan, note, spread, curves }: FiguresInput): NoteFigures {
  const candidate = plan.chosen === null ? null : (plan.candidates[plan.chosen] ?? null)
  if (!candidate) return NO_FIGURES
  const design = designSchema.parse(document)
  return {
    levels: note.first.levels ? drawLevels(note.first.levels.levels, design, note.meta.paper) : null,
    schematic: note.first.schematic ? drawSchematic(document, candidate, note.meta) : null,
    transfer: drawTransfer(design, candidate),
    errors: drawErrors(design, candidate),
    spread: spread && drawSpread(design, candidate, spread),
    noise: curves && drawPlot(noisePlot(curves.noise)),
    response:
      curves &&
      drawPlot(
        responsePlot(curves.bode, {
          filter: candidate.filter ?? null,
          bandwidth: design.sensor.bandwidth ?? null,
        }),
      ),
  }
}

function drawErrors(design: Design, { budget }: Candidate): ReactNode {
  if (!budget) return null
  const chart = errorBars(budget, budget.target?.state ?? 'calibrated', 1 / budget.perQuantity)
  const drawing = layoutErrorChart(chart, { unit: design.sensor.quantity.unit, width: BLOCK_PX })
  return drawAt(drawing)
}

function drawSpread(design: Design, { budget }: Candidate, spread: Spread): ReactNode {
  const limit = budget?.target ? budget.target.limit / budget.perQuantity : null
  return drawAt(layoutSpreadPlot(spread, { unit: design.sensor.quantity.unit, target: limit }))
}

const drawPlot = ({ plot }: NamedPlot): ReactNode => drawAt(layoutCurvePlot(plot, { panel: PANEL_PX }))

/** At its own size, or as wide as the text block. */
function drawAt(drawing: { width: number; height: number; shapes: Shape[] }): ReactNode {
  const box = enclose({ x: 0, y: 0, width: drawing.width, height: drawing.height }, drawing.shapes)
  const width = Math.min(BLOCK_WIDTH, box.width * POINTS_PER_PX)
  return <Drawing shapes={drawing.shapes} box={box} width={width} />
}

function drawLevels(levels: readonly Level[], design: Design, paper: Paper): ReactNode {
  const drawing = layoutLevelDiagram(levels, {
    mode: 'share',
    worst: true,
    quantity: design.sensor.quantity,
    rule: design.rules.room,
    measures: {
      ...noteMeasures(levels.length, BLOCK_PX),
      column: BLOCK_PX / levels.length,
      region: REGION_PX[paper],
    },
  })
  const box = enclose({ x: 0, y: 0, width: BLOCK_PX, height: drawing.height }, drawing.shapes)
  return <Drawing shapes={drawing.shapes} box={box} width={BLOCK_WIDTH} />
}

/** Scaled down where it would be wider than the text block or too high; otherwise at its own size. */
function drawSchematic(document: DesignDocument, candidate: Candidate, meta: Note['meta']): ReactNode {
  const network = buildNetworkFor(document, candidate)
  if (!network) return null
  const drawing = layoutSchematic(network, {
    symbols: meta.symbols,
    labels: { VSENSE: document.sensor.quantity.name, converter: `${document.converter.bits} bit` },
  })
  const box = enclose({ x: 0, y: 0, width: drawing.width, height: drawing.height }, drawing.shapes)
  const byHeight = Math.max(SMALLEST_SCALE, SCHEMATIC_PX[meta.paper] / box.height)
  const rows = BLOCK_PX / box.width < SMALLEST_SCALE ? cutBetweenStages(box, drawing.chain) : [box]
  const widest = Math.max(...rows.map((row) => row.width))
  const scale = Math.min(1, BLOCK_PX / widest, byHeight)
  return (
    <View>
      {rows.map((row) => (
        <Drawing key={row.x} shapes={drawing.shapes} box={row} width={row.width * scale * POINTS_PER_PX} />
      ))}
    </View>
  )
}

/** Right of a boundary between stages, where only the signal's wire crosses, px. */
const PAST = 6

/** A chain too long for the sheet in rows, each cut where one stage ends; the wire that is cut goes on below. */
function cutBetweenStages(box: Box, chain: readonly Shape[]): Box[] {
  const strokes = chain.flatMap((shape) =>
    shape.type === 'line' && shape.x1 !== shape.x2 && shape.y1 !== shape.y2
      ? [(shape.x1 + shape.x2) / 2 + PAST]
      : [],
  )
  const count = Math.ceil((box.width * SMALLEST_SCALE) / BLOCK_PX)
  const end = box.x + box.width
  const cuts: number[] = []
  for (let i = 1; i < count; i++) {
    const ideal = box.x + (box.width * i) / count
    const inside = strokes.filter((x) => x > (cuts.at(-1) ?? box.x) + PAST && x < end - PAST)
    const nearest = inside.reduce<number | null>(
      (best, x) => (best === null || Math.abs(x - ideal) < Math.abs(best - ideal) ? x : best),
      null,
    )
    if (nearest !== null) cuts.push(nearest)
  }
  const edges = [box.x, ...cuts, end]
  return edges
    .slice(1)
    .map((right, i) => ({ ...box, x: edges[i] ?? box.x, width: right - (edges[i] ?? box.x) }))
}

function drawTransfer(design: Design, candidate: Candidate): ReactNode {
  const input = transferOf(candidate, design.sensor.quantity, design.converter)
  if (!input) return null
  return drawAt(layoutTransferPlot(input, { height: TRANSFER_PX }))
}

/** Lettering here is a little wider than on screen: the box grows sideways to hold all of it. */
function enclose(box: Box, shapes: readonly Shape[]): Box {
  const texts = shapes.filter((shape) => shape.type === 'text').map((shape) => textBox(shape))
  const slack = (width: number) => width * 0.06
  const left = Math.min(box.x, ...texts.map((t) => t.x - slack(t.width)))
  const right = Math.max(box.x + box.width, ...texts.map((t) => t.x + t.width + slack(t.width)))
  return { ...box, x: left, width: right - left }
}
