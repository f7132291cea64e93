import { describe, expect, it } from 'vitest'
import { chosenMark, markAt, moveChoice, type Choice } from '#client/components/drawings/level-choice.ts'
import { moveCursor } from '#client/components/drawings/transfer-cursor.ts'
import { layoutLevelDiagram } from '#shared/drawings/level-diagram.ts'
import type { TransferInput } from '#shared/drawings/transfer-input.ts'
import { gauge } from '#tests/shared/drawings/sample-levels.ts'

const quantity = { name: 'Stilling-well level', unit: 'm', low: -0.1, high: 5.2 }
const bays = (worst: boolean) => layoutLevelDiagram(gauge, { mode: 'share', worst, quantity }).bays

describe('arrow keys in the level diagram', () => {
  const walk = (keys: string[], worst = true) =>
    keys.reduce<Choice | null>((choice, key) => moveChoice(bays(worst), choice, key) ?? choice, null)

  it('begin at the high level of the first node and walk through nodes', () => {
    expect(walk(['ArrowRight'])).toEqual({ bay: 0, name: 'high' })
    expect(walk(['ArrowRight', 'ArrowRight', 'ArrowRight'])).toEqual({ bay: 2, name: 'high' })
    expect(walk(['End', 'ArrowRight'])).toEqual({ bay: 3, name: 'high' })
    expect(walk(['ArrowRight', 'End', 'Home'])).toEqual({ bay: 0, name: 'high' })
  })

  it('walk from the upper limit down to the lower limit and stop there', () => {
    const down = ['ArrowRight', 'ArrowUp', 'ArrowUp', 'ArrowUp']
    const names = [...Array(7).keys()].map(
      (n) => walk([...down, ...Array<string>(n).fill('ArrowDown')])?.name,
    )
    expect(names).toEqual([
      'upper limit',
      'worst high',
      'high',
      'low',
      'worst low',
      'lower limit',
      'lower limit',
    ])
  })

  it('leave out the worst ends where they are not shown, and keep a choice that vanished close by', () => {
    expect(walk(['ArrowRight', 'ArrowUp'], false)?.name).toBe('upper limit')
    expect(chosenMark(bays(false), { bay: 1, name: 'worst low' })?.mark.name).toMatch(/^low|lower limit$/)
  })

  it('leave other keys to the page', () => {
    expect(moveChoice(bays(true), null, 'Tab')).toBeNull()
    expect(moveChoice([], null, 'ArrowRight')).toBeNull()
  })

  it('give the pointer the mark nearest to it', () => {
    const bay = bays(true)[1]
    if (!bay) throw new Error('no bay')
    expect(markAt(bay, 0)).toBe('upper limit')
    expect(markAt(bay, 400)).toBe('lower limit')
    expect(markAt(bay, (bay.marks.find((m) => m.name === 'high')?.y ?? 0) + 0.2)).toBe('high')
  })
})

describe('the cursor of the transfer plot', () => {
  const input: TransferInput = {
    quantity: { name: 'x', unit: 'm', low: 0, high: 5 },
    converter: { input: { low: 0, high: 4 }, bits: 12, coding: 'straight' },
    nominal: { low: 0.5, high: 3 },
    worst: { low: { low: 0.4, high: 0.6 }, high: { low: 2.9, high: 3.1 } },
    codesUsed: 2560,
    region: { low: 0, high: 4 },
    linear: { low: -1, high: 7 },
    worstLinear: { low: -0.8, high: 6.6 },
  }
  const coarse = { fine: false, letters: true }

  it('moves by 1 % of the span, with Shift by 0.1 %', () => {
    expect(moveCursor(input, 2, 'ArrowRight', coarse)).toBe(2.05)
    expect(moveCursor(input, 2, 'ArrowLeft', { ...coarse, fine: true })).toBe(1.995)
    expect(moveCursor(input, 0.05, 'ArrowLeft', coarse)).toBe(0)
  })

  it('gathers no residue over a hundred steps', () => {
    let at = 0
    for (let i = 0; i < 100; i += 1) at = moveCursor(input, at, 'ArrowRight', coarse) ?? NaN
    expect(at).toBe(5)
  })

  it('goes to the ends of the span, and with L from limit to limit', () => {
    expect(moveCursor(input, 2, 'Home', coarse)).toBe(0)
    expect(moveCursor(input, 2, 'End', coarse)).toBe(5)
    expect(moveCursor(input, 2, 'l', coarse)).toBe(5)
    expect(moveCursor(input, 5, 'L', coarse)).toBe(7)
    expect(moveCursor(input, 7, 'l', coarse)).toBe(-1)
  })

  it('leaves letters alone where they are turned off', () => {
    expect(moveCursor(input, 2, 'l', { fine: false, letters: false })).toBeNull()
    expect(moveCursor(input, 2, 'x', coarse)).toBeNull()
  })
})
