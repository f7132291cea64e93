import { useRef, useState, type FocusEvent, type KeyboardEvent } from 'react'
import { moveInGrid, type Cell } from './grid-moves.ts'

/**
 * One tab stop for a whole table; arrows, Home, End and Page keys move between its cells. A cell carries
 * `data-cell="row:column"`; the link or button inside it takes the focus where there is one.
 */
export function useGridFocus(rows: number, columns: number) {
  const [at, setAt] = useState<Cell>({ row: 0, column: 1 })
  const table = useRef<HTMLTableElement>(null)
  const current: Cell = { row: Math.max(0, Math.min(at.row, rows - 1)), column: at.column }

  const focusCell = (cell: Cell) => {
    const element = table.current?.querySelector<HTMLElement>(`[data-cell="${cell.row}:${cell.column}"]`)
    const target = element?.querySelector<HTMLElement>('a, button') ?? element
    target?.focus()
    target?.scrollIntoView({ block: 'nearest', inline: 'nearest' })
  }

  return {
    table,
    row: current.row,
    focusCell,
    tabIndexFor: (row: number, column: number) => (row === current.row && column === current.column ? 0 : -1),
    /** Follows a press of the pointer or focus that came from elsewhere. */
    onFocus: (event: FocusEvent<HTMLElement>) => {
      const place = event.target.closest('[data-cell]')?.getAttribute('data-cell')?.split(':').map(Number)
      const [row, column] = place ?? []
      if (row !== undefined && column !== undefined) setAt({ row, column })
    },
    /** True where the key moved the focus. In the capture phase, so that menus in cells do not take the arrows. */
    move: (event: KeyboardEvent<HTMLElement>): boolean => {
      if (event.altKey || event.shiftKey || event.metaKey) return false
      const next = moveInGrid(current, { key: event.key, ctrl: event.ctrlKey }, rows, columns)
      if (!next) return false
      event.preventDefault()
      event.stopPropagation()
      setAt(next)
      focusCell(next)
      return true
    },
  }
}
