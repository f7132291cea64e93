import type { LineStyle, TextStyle } from '#shared/drawings/styles.ts'
import { colours } from './theme.ts'

/** Print colours of the drawing styles: a stroke, a fill, and a hatching colour where the style has one. */
export interface Paint {
  stroke?: string
  fill?: string
  hatch?: string
}

export const paints: Record<LineStyle, Paint> = {
  poche: { fill: colours.poche, hatch: colours.pocheLine },
  opening: { fill: colours.sheet },
  room: { hatch: colours.verdigris },
  wash: { fill: colours.woadWash },
  over: { fill: colours.minium, hatch: colours.sheet },
  worst: { stroke: colours.woad },
  'worst-over': { stroke: colours.minium },
  level: { stroke: colours.woad },
  'level-over': { stroke: colours.minium },
  signed: { stroke: colours.heather },
  limit: { stroke: colours.frame },
  side: { stroke: colours.frame },
  link: { stroke: colours.woad },
  break: { stroke: colours.ink },
  unknown: { stroke: colours.ink3 },
  spandrel: { fill: colours.verdigris },
  arch: { stroke: colours.ink },
  'dim-clear': { stroke: colours.verdigris },
  'dim-tight': { stroke: colours.ochre },
  'dim-plain': { stroke: colours.ink3 },
  'head-clear': { fill: colours.verdigris },
  'head-tight': { fill: colours.ochre },
  'head-plain': { fill: colours.ink3 },
  extension: { stroke: colours.ink3 },
  axis: { stroke: colours.ink },
  grid: { stroke: colours.hair },
  cursor: { stroke: colours.ink },
  chosen: { stroke: colours.heather },
  'mini-room': { fill: colours.verdigrisWash },
  'mini-level': { fill: colours.woad },
  'mini-end': { stroke: colours.woad },
  'mini-limit': { stroke: colours.frame },
  'mini-over': { fill: colours.minium },
  'mini-tight': { fill: colours.ochre },
  'mini-link': { stroke: colours.woad },
  body: { stroke: colours.ink, fill: colours.sheet },
  pin: { stroke: colours.ink },
  sign: { stroke: colours.ink },
  wire: { stroke: colours.ink },
  junction: { fill: colours.ink },
  terminal: { stroke: colours.ink, fill: colours.sheet },
  chain: { stroke: colours.ink3 },
  'chain-stroke': { stroke: colours.ink },
}

export const textColours: Record<TextStyle, string> = {
  title: colours.ink,
  gain: colours.ink3,
  'limit-value': colours.ink,
  'level-value': colours.woad,
  'over-value': colours.minium,
  'clip-value': colours.minium,
  'measurand-value': colours.ink2,
  'room-clear': colours.verdigris,
  'room-tight': colours.ochre,
  'room-over': colours.minium,
  'unknown-text': colours.ink3,
  'key-text': colours.ink3,
  'axis-text': colours.ink2,
  'axis-name': colours.ink,
  'line-name': colours.woad,
  'dim-text': colours.ink2,
  label: colours.ink3,
  value: colours.ink,
  'chain-text': colours.ink,
  'pin-name': colours.ink3,
}
