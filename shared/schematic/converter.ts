import { text } from '#shared/drawings/shapes.ts'
import type { Sheet, Spot } from './sheet.ts'
import { CONVERTER, converterSymbol } from './symbols.ts'

/** The converter's block with its point at `tip`. */
export function placeConverter(sheet: Sheet, tip: Spot): void {
  const symbol = converterSymbol(tip.x, tip.y)
  const x = tip.x + (CONVERTER.width + CONVERTER.point) / 2
  const more = sheet.options.labels?.converter
  sheet.parts.push({
    ref: 'converter',
    kind: 'converter',
    stage: 'converter',
    value: more ?? '',
    pins: [{ name: 'in', node: sheet.graph.output, ...tip }],
    body: symbol.body,
    shapes: symbol.shapes,
    labels: [
      text('value', x, tip.y + CONVERTER.half + 14, 'converter', 'middle', { on: 'sheet' }),
      ...(more ? [text('label', x, tip.y + CONVERTER.half + 26, more, 'middle', { on: 'sheet' })] : []),
    ],
  })
}
