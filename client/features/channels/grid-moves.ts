export interface Cell {
  row: number
  column: number
}

interface Keystroke {
  key: string
  ctrl: boolean
}

const PAGE = 8

/** Where a key leads in a grid of cells (ARIA grid pattern); null where it is none of the grid's keys. */
export function moveInGrid(from: Cell, { key, ctrl }: Keystroke, rows: number, columns: number): Cell | null {
  const to = (row: number, column: number): Cell => ({
    row: Math.max(0, Math.min(rows - 1, row)),
    column: Math.max(0, Math.min(columns - 1, column)),
  })
  switch (key) {
    case 'ArrowDown':
      return to(from.row + 1, from.column)
    case 'ArrowUp':
      return to(from.row - 1, from.column)
    case 'ArrowRight':
      return to(from.row, from.column + 1)
    case 'ArrowLeft':
      return to(from.row, from.column - 1)
    case 'Home':
      return to(ctrl ? 0 : from.row, 0)
    case 'End':
      return to(ctrl ? rows - 1 : from.row, columns - 1)
    case 'PageDown':
      return to(from.row + PAGE, from.column)
    case 'PageUp':
      return to(from.row - PAGE, from.column)
    default:
      return null
  }
}
