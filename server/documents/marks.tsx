import { Circle, Line, Rect, Svg, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { RoomState } from '#shared/design/plan.ts'
import { colours } from './theme.ts'

/**
 * The product's mark: an arch in a square with its two spandrels filled. Made of boxes: the PDF library does not
 * lay out drawings in the frame of a sheet.
 */
export function ArchMark({ size }: { size: number }): ReactNode {
  const [radius, wall] = [size / 2, size * 0.145]
  const inner = size - 2 * wall
  return (
    <View style={{ width: size, height: size }}>
      <View style={[corner, { width: size, height: size * 0.56, backgroundColor: colours.verdigris }]} />
      <View
        style={[
          corner,
          { width: size, height: size, backgroundColor: colours.ink },
          { borderTopLeftRadius: radius, borderTopRightRadius: radius },
        ]}
      />
      <View
        style={[
          corner,
          { left: wall, top: wall, width: inner, height: size - wall, backgroundColor: colours.sheet },
          { borderTopLeftRadius: inner / 2, borderTopRightRadius: inner / 2 },
        ]}
      />
    </View>
  )
}

const corner = { position: 'absolute', left: 0, top: 0 } as const

const fills: Record<RoomState, string> = {
  clear: 'none',
  tight: colours.ochre,
  over: colours.minium,
  unknown: 'none',
}

export const stateColours: Record<RoomState, string> = {
  clear: colours.ink,
  tight: colours.ochre,
  over: colours.minium,
  unknown: colours.ink3,
}

/** A small bay: two limit lines and what is between them. Shape tells the state, colour only repeats it. */
export function StateMark({ state, size = 7.5 }: { state: RoomState; size?: number }): ReactNode {
  const dash = state === 'unknown' ? { strokeDasharray: '3 2' } : {}
  const block = { clear: [5, 6], tight: [2, 8], over: [0, 9], unknown: [8, 0] }[state]
  return (
    <Svg width={size} height={size} viewBox="0 0 16 16">
      {block[1] ? (
        <Rect
          x={4}
          y={block[0] ?? 0}
          width={8}
          height={block[1] ?? 0}
          fill={fills[state]}
          stroke={stateColours[state]}
          strokeWidth={1.4}
        />
      ) : (
        <Line x1={5} y1={8} x2={11} y2={8} stroke={colours.ink3} strokeWidth={1.4} />
      )}
      <Line x1={0} y1={2.6} x2={16} y2={2.6} stroke={colours.ink} strokeWidth={1.8} {...dash} />
      <Line x1={0} y1={14} x2={16} y2={14} stroke={colours.ink} strokeWidth={1.8} {...dash} />
    </Svg>
  )
}

/** A caution is no state of room: a ring with a bar. */
export function CautionMark({ size = 7.5 }: { size?: number }): ReactNode {
  return (
    <Svg width={size} height={size} viewBox="0 0 16 16">
      <Circle cx={8} cy={8} r={6.8} fill="none" stroke={colours.ink} strokeWidth={1.6} />
      <Line x1={8} y1={4} x2={8} y2={9.4} stroke={colours.ink} strokeWidth={1.9} />
      <Line x1={8} y1={11} x2={8} y2={12.7} stroke={colours.ink} strokeWidth={1.9} />
    </Svg>
  )
}
