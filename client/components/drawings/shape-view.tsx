import { createContext, memo, use, useId, type CSSProperties, type ReactNode } from 'react'
import type { Shape, TextShape } from '#shared/drawings/shapes.ts'
import { linePaint, textPaint, type Hatch, type LineStyle } from '#shared/drawings/styles.ts'
import './drawings.css'
import './frames.css'

const PatternPrefix = createContext('')

/**
 * An SVG with the hatch patterns that its shapes need. Without a label it is hidden from assistive technology: a table
 * says the same.
 */
export function Drawing({
  box,
  className,
  label,
  children,
}: {
  box: { x: number; y: number; width: number; height: number }
  className?: string
  label?: string
  children: ReactNode
}) {
  // Patterns are per drawing: a reference into a drawing that is not displayed paints nothing.
  const prefix = useId().replace(/[^a-zA-Z0-9]/g, '')
  return (
    <svg
      className={`d-drawing${className ? ` ${className}` : ''}`}
      width={box.width}
      height={box.height}
      viewBox={`${box.x} ${box.y} ${box.width} ${box.height}`}
      {...(label === undefined ? { 'aria-hidden': true } : { role: 'group', 'aria-label': label })}
      focusable="false"
    >
      <defs>
        <pattern
          id={`${prefix}room`}
          width="6"
          height="6"
          patternUnits="userSpaceOnUse"
          patternTransform="rotate(45)"
        >
          <path className="d-hatch-room" d="M0 0V6" strokeWidth="1.3" opacity=".5" />
        </pattern>
        <pattern
          id={`${prefix}poche`}
          width="4"
          height="4"
          patternUnits="userSpaceOnUse"
          patternTransform="rotate(-45)"
        >
          <path className="d-hatch-poche" d="M0 0V4" strokeWidth="1.4" />
        </pattern>
        <pattern
          id={`${prefix}over`}
          width="4"
          height="4"
          patternUnits="userSpaceOnUse"
          patternTransform="rotate(45)"
        >
          <path className="d-hatch-over" d="M0 0V4M0 0H4" strokeWidth="1" fill="none" />
        </pattern>
      </defs>
      <PatternPrefix value={prefix}>{children}</PatternPrefix>
    </svg>
  )
}

export const Shapes = memo(function Shapes({ shapes }: { shapes: readonly Shape[] }) {
  return shapes.map((shape, i) => <ShapeView key={shape.key ?? `${shape.type} ${i}`} shape={shape} />)
})

function ShapeView({ shape }: { shape: Shape }) {
  if (shape.type === 'text') return <TextView shape={shape} />
  const { hatch } = linePaint(shape.style)
  return (
    <>
      <Outline shape={shape} />
      {hatch ? <HatchFill shape={shape} hatch={hatch} /> : null}
    </>
  )
}

type OutlineShape = Exclude<Shape, TextShape>

function paint(style: LineStyle) {
  const { width, dash, opacity } = linePaint(style)
  return {
    className: `d d-${style}`,
    ...(width > 0 ? { strokeWidth: width } : {}),
    ...(dash ? { strokeDasharray: dash.join(' ') } : {}),
    ...(opacity === undefined ? {} : { opacity }),
  }
}

function Outline({ shape }: { shape: OutlineShape }) {
  const common = paint(shape.style)
  if (shape.key !== undefined) {
    const gliding = glidingShape(shape, common)
    if (gliding) return gliding
  }
  return figure(shape, common)
}

/** Horizontal lines and plain areas that are named glide: they are drawn at the origin and moved by a transform. */
function glidingShape(shape: OutlineShape, common: ReturnType<typeof paint>): ReactNode {
  const moved = (transform: string): { className: string; style: CSSProperties } => ({
    className: `${common.className} d-glides`,
    style: { transform },
  })
  if (shape.type === 'line' && shape.y1 === shape.y2)
    return (
      <line {...common} {...moved(`translateY(${shape.y1}px)`)} x1={shape.x1} x2={shape.x2} y1={0} y2={0} />
    )
  if (shape.type === 'rect' && !linePaint(shape.style).hatch)
    return (
      <rect
        {...common}
        {...moved(`translateY(${shape.y}px) scaleY(${shape.height})`)}
        x={shape.x}
        y={0}
        width={shape.width}
        height={1}
      />
    )
  return null
}

function HatchFill({ shape, hatch }: { shape: OutlineShape; hatch: Hatch }) {
  const prefix = use(PatternPrefix)
  return figure(shape, { fill: `url(#${prefix}${hatch})` })
}

function figure(shape: OutlineShape, common: Record<string, unknown>): ReactNode {
  switch (shape.type) {
    case 'line':
      return <line {...common} x1={shape.x1} y1={shape.y1} x2={shape.x2} y2={shape.y2} />
    case 'rect':
      return <rect {...common} x={shape.x} y={shape.y} width={shape.width} height={shape.height} />
    case 'circle':
      return <circle {...common} cx={shape.cx} cy={shape.cy} r={shape.r} />
    case 'path':
      return <path {...common} d={shape.d} />
    case 'polyline': {
      const points = shape.points.map(([x, y]) => `${x},${y}`).join(' ')
      return shape.closed ? <polygon {...common} points={points} /> : <polyline {...common} points={points} />
    }
  }
}

function TextView({ shape }: { shape: TextShape }) {
  const { size, weight, stretch } = textPaint(shape.style)
  const common = {
    x: shape.x,
    y: shape.y,
    textAnchor: shape.anchor,
    fontSize: size * (shape.scale ?? 1),
    fontWeight: weight,
    style: { fontStretch: `${stretch}%` },
    ...(shape.turned ? { transform: `rotate(-90 ${shape.x} ${shape.y})` } : {}),
  }
  // The halo is painted under the letters, so that a line behind them does not disturb reading.
  const ground = shape.on ? ` d-on d-on-${shape.on}` : ''
  return (
    <text {...common} className={`d-${shape.style}${ground}`}>
      {shape.text}
    </text>
  )
}
