import { Circle, G, Line, Path, Polygon, Polyline, Rect, Svg, Text } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import { hatchLines } from '#shared/drawings/hatch.ts'
import type { Box, LineShape, Shape, TextShape } from '#shared/drawings/shapes.ts'
import { linePaint, textPaint, type Hatch } from '#shared/drawings/styles.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { TEXT } from './fonts.ts'
import { toPrintable } from './glyphs.ts'
import { boxOf, clipToPolygon, readPolygon } from './polygon.ts'
import { paints, textColours, type Paint } from './shape-colours.ts'
import { colours } from './theme.ts'

/** The smallest type on paper, pt. */
const SMALLEST = 7

interface DrawingProps {
  shapes: readonly Shape[]
  /** Part of the drawing's own coordinates that is shown, px. */
  box: Box
  /** Width on the sheet, pt; the height follows. */
  width: number
}

/** Paints the shapes of a drawing in print colours. Line widths and type stay readable whatever the scale. */
export function Drawing({ shapes, box, width }: DrawingProps): ReactNode {
  const scale = width / box.width
  return (
    <Svg
      width={width}
      height={box.height * scale}
      viewBox={`${round(box.x)} ${round(box.y)} ${round(box.width)} ${round(box.height)}`}
    >
      {shapes.map((shape, index) => (
        <Painted key={index} shape={shape} scale={scale} />
      ))}
    </Svg>
  )
}

interface PaintedProps {
  shape: Shape
  scale: number
}

function Painted({ shape, scale }: PaintedProps): ReactNode {
  if (shape.type === 'text') return <Lettering shape={shape} scale={scale} />
  const paint = linePaint(shape.style)
  const colour = paints[shape.style]
  const base = {
    fill: closed(shape) && (paint.filled || colour.fill) ? (colour.fill ?? 'none') : 'none',
    ...(paint.width > 0 && colour.stroke ? { stroke: colour.stroke, strokeWidth: paint.width } : {}),
    ...(paint.dash ? { strokeDasharray: paint.dash.join(' ') } : {}),
    ...(paint.opacity === undefined ? {} : { opacity: paint.opacity }),
    strokeLinejoin: 'round' as const,
  }
  const hatch = paint.hatch ? <Hatching shape={shape} hatch={paint.hatch} colour={colour} /> : null
  switch (shape.type) {
    case 'line':
      return (
        <Line x1={round(shape.x1)} y1={round(shape.y1)} x2={round(shape.x2)} y2={round(shape.y2)} {...base} />
      )
    case 'polyline': {
      const points = shape.points.map(([x, y]) => `${round(x)},${round(y)}`).join(' ')
      return shape.closed ? <Polygon points={points} {...base} /> : <Polyline points={points} {...base} />
    }
    case 'rect':
      if (!(shape.width > 0 && shape.height > 0)) return null
      return (
        <G>
          <Rect
            x={round(shape.x)}
            y={round(shape.y)}
            width={round(shape.width)}
            height={round(shape.height)}
            {...base}
          />
          {hatch}
        </G>
      )
    case 'path':
      return (
        <G>
          <Path d={shape.d} {...base} />
          {hatch}
        </G>
      )
    case 'circle':
      return <Circle cx={round(shape.cx)} cy={round(shape.cy)} r={round(shape.r)} {...base} />
  }
}

const closed = (shape: Exclude<Shape, TextShape>): boolean => {
  if (shape.type === 'polyline') return shape.closed === true
  if (shape.type === 'path') return /z\s*$/i.test(shape.d)
  return shape.type !== 'line'
}

const hatchings: Record<Hatch, { spacing: number; angles: number[]; width: number; opacity: number }> = {
  room: { spacing: 4.5, angles: [45], width: 0.8, opacity: 0.5 },
  poche: { spacing: 3, angles: [135], width: 1, opacity: 1 },
  over: { spacing: 3.2, angles: [45, 135], width: 0.8, opacity: 1 },
}

interface HatchingProps {
  shape: Exclude<Shape, TextShape>
  hatch: Hatch
  colour: Paint
}

/** Hatching as lines, since drawings of this library have no patterns; all in one path, as an element each is slow. */
function Hatching({ shape, hatch, colour }: HatchingProps): ReactNode {
  const { spacing, angles, width, opacity } = hatchings[hatch]
  const d = angles.flatMap((angle) => hatched(shape, spacing, angle).map(toSegment)).join('')
  if (d === '') return null
  return (
    <Path
      d={d}
      fill="none"
      stroke={colour.hatch ?? colours.hair}
      strokeWidth={width}
      strokeOpacity={opacity}
    />
  )
}

function hatched(shape: Exclude<Shape, TextShape>, spacing: number, angle: number): LineShape[] {
  if (shape.type === 'rect') return hatchLines(shape, spacing, angle)
  const points = shape.type === 'path' ? readPolygon(shape.d) : null
  if (!points) return []
  return hatchLines(boxOf(points), spacing, angle).flatMap((line) => clipToPolygon(line, points))
}

const toSegment = ({ x1, y1, x2, y2 }: LineShape): string =>
  `M${round(x1)} ${round(y1)}L${round(x2)} ${round(y2)}`

/** Nearest weight that the note's family is registered in. */
const toWeight = (weight: number): 400 | 500 | 600 => (weight < 450 ? 400 : weight < 575 ? 500 : 600)

function Lettering({ shape, scale }: { shape: TextShape; scale: number }): ReactNode {
  const { size, weight } = textPaint(shape.style)
  const fontSize = Math.max(size * (shape.scale ?? 1), SMALLEST / scale)
  const halo = shape.on ? textBox(shape) : null
  const turn = shape.turned ? { transform: `rotate(-90 ${round(shape.x)} ${round(shape.y)})` } : {}
  return (
    <G>
      {halo ? (
        <Rect
          x={round(halo.x - 1)}
          y={round(halo.y)}
          width={round(halo.width + 2)}
          height={round(halo.height)}
          fill={shape.on === 'wash' ? colours.woadWash : colours.sheet}
        />
      ) : null}
      <G {...turn}>
        <Text
          x={round(shape.x)}
          y={round(shape.y)}
          fill={textColours[shape.style]}
          textAnchor={shape.anchor}
          style={{ fontFamily: TEXT, fontSize, fontWeight: toWeight(weight) }}
        >
          {toPrintable(shape.text)}
        </Text>
      </G>
    </G>
  )
}

const round = (value: number): number => Math.round(value * 100) / 100
