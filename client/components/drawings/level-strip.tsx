import type { MouseEvent } from 'react'
import type { LevelDrawing } from '#shared/drawings/level-diagram.ts'
import { rect } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { chosenMark, markAt, type Choice } from './level-choice.ts'
import { Drawing, Shapes } from './shape-view.tsx'

interface StripProps {
  drawing: LevelDrawing
  gutter: number
  column: number
  choice: Choice | null
  onChoose(choice: Choice): void
  onGo(choice: Choice): void
}

/** From this many bays on the strip scrolls between its first and last bay. */
const PINNED_FROM = 8

export function LevelStrip(props: StripProps) {
  const { drawing, gutter, column } = props
  const { height } = drawing
  if (drawing.bays.length < PINNED_FROM) {
    // The figures of the last bay may be longer than what its column leaves them.
    const texts = drawing.shapes.flatMap((shape) => (shape.type === 'text' ? [textBox(shape)] : []))
    const width = Math.ceil(Math.max(drawing.width, ...texts.map((box) => box.x + box.width + 2)))
    return (
      <div className="d-strip">
        <Part {...props} box={{ x: 0, y: 0, width, height }} />
      </div>
    )
  }
  const { width } = drawing
  // The same drawing through three windows, of which the outer two stay in place.
  const first = gutter + column
  return (
    <div className="d-strip">
      <Part {...props} box={{ x: 0, y: 0, width: first, height }} className="d-pin-left" />
      <Part {...props} box={{ x: first, y: 0, width: width - first - column, height }} />
      <Part {...props} box={{ x: width - column, y: 0, width: column, height }} className="d-pin-right" />
    </div>
  )
}

function Part({
  drawing,
  choice,
  onChoose,
  onGo,
  box,
  className,
}: StripProps & { box: { x: number; y: number; width: number; height: number }; className?: string }) {
  const chosen = chosenMark(drawing.bays, choice)
  const under = (event: MouseEvent<SVGRectElement>, i: number): Choice | null => {
    const bay = drawing.bays[i]
    const area = event.currentTarget.getBoundingClientRect()
    const y = bay ? bay.box.y + ((event.clientY - area.top) / area.height) * bay.box.height : 0
    const name = bay ? markAt(bay, y) : null
    return name ? { bay: i, name } : null
  }
  return (
    <Drawing box={box} {...(className ? { className } : {})}>
      <Shapes shapes={drawing.shapes} />
      {chosen ? (
        <Shapes
          shapes={[
            rect('chosen', {
              x: chosen.bay.box.x - 9,
              y: chosen.mark.y - 5,
              width: chosen.bay.box.width + 18,
              height: 10,
            }),
          ]}
        />
      ) : null}
      {drawing.bays.map((bay, i) => (
        <rect
          key={bay.node}
          {...bay.box}
          className="d-hit"
          onClick={(event) => {
            const choice = under(event, i)
            if (choice) onChoose(choice)
          }}
          onDoubleClick={(event) => {
            const choice = under(event, i)
            if (choice) onGo(choice)
          }}
        />
      ))}
    </Drawing>
  )
}
