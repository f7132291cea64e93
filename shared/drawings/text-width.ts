import type { Box, TextShape } from './shapes.ts'
import { textPaint, type TextStyle } from './styles.ts'

/**
 * Width of a text without a browser. Advances are those of Roboto Flex at weight 500, width 88 %, in hundredths of an
 * em (measured); other cuts differ by a few per cent, which `SLACK` covers.
 */
const advances: [number, string][] = [
  [19, "'/"],
  [26, 'Iijl  |'],
  [31, 'tf,.!:;·"'],
  [35, '-()[]r{}°'],
  [47, 'vyz_'],
  [51, 'ckx+=<>−×±s^?~`'],
  [56, '0123456789ahnudeobgpqμFEJ$'],
  [62, 'ABKPRTVXYZSσΔ&L'],
  [70, 'CDGHNOQUΩ'],
  [88, 'mMWw%#@'],
]
const advanceOf = new Map(
  advances.flatMap(([width, letters]) => [...letters].map((l) => [l, width / 100] as const)),
)
const OTHER = 0.7
const SLACK = 1.04

/** Width of a text in a style, px. */
export function textWidth(content: string, style: TextStyle, scale = 1): number {
  const { size, stretch, weight } = textPaint(style)
  const ems = [...content].reduce((sum, letter) => sum + (advanceOf.get(letter) ?? OTHER), 0)
  const cut = 1 + (stretch - 88) * 0.002 + Math.max(0, weight - 500) * 0.0002
  return ems * size * scale * cut * SLACK
}

/** Box of a text shape: from the ascent of its figures to a fifth of the size under the baseline. */
export function textBox(shape: TextShape): Box {
  const scale = shape.scale ?? 1
  const size = textPaint(shape.style).size * scale
  const width = textWidth(shape.text, shape.style, scale)
  const shift = shape.anchor === 'start' ? 0 : shape.anchor === 'middle' ? width / 2 : width
  if (shape.turned) {
    return { x: shape.x - size * 0.75, y: shape.y - width + shift, width: size * 0.95, height: width }
  }
  return { x: shape.x - shift, y: shape.y - size * 0.75, width, height: size * 0.95 }
}
