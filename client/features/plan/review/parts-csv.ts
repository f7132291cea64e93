import type { Component } from '#shared/design/plan.ts'

/**
 * The parts list as CSV (RFC 4180: CRLF, quotes doubled). Text cells that a spreadsheet would take for a formula get
 * an apostrophe in front; numbers stay numbers.
 */
export function toPartsCsv(components: readonly Component[]): string {
  const head = ['Part', 'Kind', 'Value', 'Unit', 'Tolerance', 'Name', 'Sets', 'Stage', 'Fixed by hand']
  const rows = components
    .filter((part) => !part.fixed)
    .map((part) => [
      safe(part.ref),
      safe(part.kind),
      part.value === undefined ? '' : String(part.value),
      part.value === undefined ? '' : part.kind === 'capacitor' ? 'F' : 'Ohm',
      part.tolerance === undefined ? '' : String(part.tolerance),
      safe(part.name ?? ''),
      safe(part.sets),
      safe(part.stage),
      part.chosen ? 'yes' : 'no',
    ])
  return [head, ...rows].map((row) => `${row.map(quoted).join(',')}\r\n`).join('')
}

const safe = (text: string): string => (/^[=+\-@\t\r\0]/.test(text) ? `'${text}` : text)

const quoted = (cell: string): string => (/[",\r\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell)
