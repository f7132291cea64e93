import { written, type Row } from './rows.ts'

/** Between these two the table stands; everything else of the file is left as it is. */
export const MARKS = { start: '<!-- speed: written by npm run bench -- --readme -->', end: '<!-- /speed -->' }

/** The file with the table renewed. Throws where the two marks are not in it, in this order. */
export function toReadme(readme: string, rows: readonly Row[], machine: string): string {
  const [from, to] = [readme.indexOf(MARKS.start), readme.indexOf(MARKS.end)]
  if (from < 0 || to < from) throw new Error(`README.md needs the lines ${MARKS.start} and ${MARKS.end}`)
  return `${readme.slice(0, from + MARKS.start.length)}\n\n${toTable(rows, machine)}\n${readme.slice(to)}`
}

/** Every headline once, with the worst of its rows; where it falls short the table says so. */
export function toTable(rows: readonly Row[], machine: string): string {
  const worst = new Map<string, Row>()
  for (const row of rows) {
    if (row.headline === undefined) continue
    const known = worst.get(row.headline)
    if (!known || isWorse(row, known)) worst.set(row.headline, row)
  }
  const cells = [
    ['figure', 'measured', 'wanted', ''],
    ...[...worst].map(([headline, { value, unit, required, met }]) => [
      headline,
      `${written(value)}${unit ? ` ${unit}` : ''}`,
      required,
      met === null ? '' : met ? 'met' : 'short',
    ]),
  ]
  const widths = [0, 1, 2, 3].map((at) => Math.max(3, ...cells.map((row) => row[at]?.length ?? 0)))
  const line = (row: readonly string[]) =>
    `| ${row.map((cell, at) => cell.padEnd(widths[at] ?? 0)).join(' | ')} |`
  const [head = [], ...body] = cells
  const rule = `| ${widths.map((width) => '-'.repeat(width)).join(' | ')} |`
  return [`Measured in one run on ${machine}.`, '', line(head), rule, ...body.map(line), ''].join('\n')
}

/** Of rows that must be small the larger is worse, of rows that must be large the smaller; else the larger is shown. */
function isWorse(a: Row, b: Row): boolean {
  if (a.met !== b.met && a.met !== null && b.met !== null) return !a.met
  return /^(≥|at least)/.test(a.required) ? a.value < b.value : a.value > b.value
}
