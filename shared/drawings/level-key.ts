import { line, rect, text, type Shape } from './shapes.ts'

/** The key at the left of the strip: a swatch of 22 × 14 px and two words each. */
export function levelKey(worst: boolean, kept = false): Shape[] {
  const swatch = (y: number) => ({ x: 0, y, width: 22, height: 14 })
  const entries: [string, (y: number) => Shape[]][] = [
    ['Beyond linear', (y) => [rect('poche', swatch(y))]],
    ['Room left', (y) => [rect('room', swatch(y))]],
    [
      'Signal',
      (y) => [
        rect('wash', swatch(y)),
        line('level', 0, y + 1, 22, y + 1),
        line('level', 0, y + 13, 22, y + 13),
      ],
    ],
    ...(worst
      ? ([['Worst case', (y: number) => [line('worst', 0, y + 7, 22, y + 7)]]] as [
          string,
          (y: number) => Shape[],
        ][])
      : []),
    ...(kept
      ? ([['Kept variant', (y: number) => [line('signed', 0, y + 7, 22, y + 7)]]] as [
          string,
          (y: number) => Shape[],
        ][])
      : []),
    ['Over a limit', (y) => [rect('over', swatch(y))]],
  ]
  return entries.flatMap(([name, draw], i) => {
    const y = 53 + i * 24
    return [...draw(y), text('key-text', 30, y + 11, name)]
  })
}
