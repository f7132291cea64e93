import { describe, expect, it } from 'vitest'
import { moveInGrid } from '#client/features/channels/grid-moves.ts'

const move = (key: string, ctrl = false, row = 4, column = 2) =>
  moveInGrid({ row, column }, { key, ctrl }, 12, 9)

describe('moving in a grid', () => {
  it.each<[string, boolean, number, number]>([
    ['ArrowDown', false, 5, 2],
    ['ArrowUp', false, 3, 2],
    ['ArrowLeft', false, 4, 1],
    ['ArrowRight', false, 4, 3],
    ['Home', false, 4, 0],
    ['End', false, 4, 8],
    ['Home', true, 0, 0],
    ['End', true, 11, 8],
    ['PageDown', false, 11, 2],
    ['PageUp', false, 0, 2],
  ])('%s with Ctrl %s goes to row %i, column %i', (key, ctrl, row, column) => {
    expect(move(key, ctrl)).toEqual({ row, column })
  })

  it('stays inside', () => {
    expect(move('ArrowUp', false, 0, 0)).toEqual({ row: 0, column: 0 })
    expect(move('ArrowLeft', false, 0, 0)).toEqual({ row: 0, column: 0 })
    expect(move('ArrowDown', false, 11, 8)).toEqual({ row: 11, column: 8 })
  })

  it('leaves other keys alone', () => {
    for (const key of ['Enter', ' ', 'a', 'Tab', 'Escape']) expect(move(key)).toBeNull()
  })
})
