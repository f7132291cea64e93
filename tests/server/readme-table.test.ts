import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { MARKS, toReadme, toTable } from '#tests/bench/readme-table.ts'
import { toRow } from '#tests/bench/rows.ts'

const rows = [
  toRow('picker: one kind', 40, 'µs', { most: 50 }, 'Picker: median'),
  toRow('picker: another kind', 70, 'µs', { most: 50 }, 'Picker: median'),
  toRow('ratio of one', 2000, '×', { least: 1000 }, 'Ratio'),
  toRow('ratio of another', 1500, '×', { least: 1000 }, 'Ratio'),
  toRow('of no interest', 3, 'ms', {}),
]

describe('the table of speeds in README', () => {
  it('shows each headline once, with its worst figure, and says where one falls short', () => {
    const lines = toTable(rows, 'two cores').split('\n')
    expect(lines[0]).toBe('Measured in one run on two cores.')
    const cells = lines.slice(4, -1).map((line) => line.split('|').map((cell) => cell.trim()))
    expect(cells).toEqual([
      ['', 'Picker: median', '70 µs', '≤ 50 µs', 'short', ''],
      ['', 'Ratio', '1,500 ×', '≥ 1,000 ×', 'met', ''],
    ])
  })

  it('takes the place of the one before and leaves the rest as it is', () => {
    const readme = `# Title\n\n${MARKS.start}\n\nold\n\n${MARKS.end}\n\nAfter.\n`
    const renewed = toReadme(readme, rows, 'two cores')
    expect(renewed).toContain('| short |')
    expect(renewed).not.toContain('old')
    expect(renewed.startsWith('# Title\n')).toBe(true)
    expect(renewed.endsWith('After.\n')).toBe(true)
    expect(toReadme(renewed, rows, 'two cores')).toBe(renewed)
    expect(() => toReadme('# Title\n', rows, 'two cores')).toThrow('needs the lines')
  })

  it('has its place in README', () => {
    const readme = readFileSync(join(import.meta.dirname, '../../README.md'), 'utf8')
    expect(() => toReadme(readme, rows, 'two cores')).not.toThrow()
  })
})
