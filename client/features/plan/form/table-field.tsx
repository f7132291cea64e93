import { TextArea } from '#client/components/text-field.tsx'
import { formatEditable } from '#shared/units/format-quantity.ts'
import { parseQuantity } from '#shared/units/parse-quantity.ts'
import { useField } from './use-field.ts'

interface Column {
  label: string
  unit: string
}

interface TableFieldProps {
  path: string
  label: string
  columns: readonly Column[]
}

/** A figure that depends on another (bandwidth by gain): one pair a line, "100: 100 k". */
export function TableField({ path, label, columns }: TableFieldProps) {
  const field = useField(path)
  const given = Array.isArray(field.value)
    ? field.value
    : Array.isArray(field.spec.preset)
      ? field.spec.preset
      : []
  const text = field.typed?.text ?? toText(given as number[][], columns)
  const [first, second] = columns
  return (
    <TextArea
      id={field.id}
      label={label}
      value={text}
      rows={3}
      disabled={field.disabled}
      help={`One pair a line: ${first?.label.toLowerCase() ?? ''}, a colon, ${second?.label.toLowerCase() ?? ''} in ${second?.unit ?? ''}.`}
      error={field.typed?.reason ?? field.error}
      onChange={(event) => {
        const next = event.target.value
        const read = readPairs(next, columns)
        if (!read.ok) field.misread(next, read.reason, label)
        else field.type(read.rows.length > 0 ? read.rows : undefined, next, label)
      }}
      onFocus={field.enter}
      onBlur={field.leave}
    />
  )
}

const toText = (rows: readonly (readonly number[])[], columns: readonly Column[]): string =>
  rows
    .map((row) => row.map((value, i) => formatEditable(value, columns[i]?.unit ?? '')).join(': '))
    .join('\n')

/** Reads the pairs; the first line that cannot be read is named. */
export function readPairs(
  text: string,
  columns: readonly Column[],
): { ok: true; rows: number[][] } | { ok: false; reason: string } {
  const rows: number[][] = []
  for (const [index, line] of text.split('\n').entries()) {
    if (line.trim() === '') continue
    const cells = line.split(':')
    if (cells.length !== columns.length)
      return { ok: false, reason: `Line ${index + 1}: type two figures with a colon between them.` }
    const row: number[] = []
    for (const [at, cell] of cells.entries()) {
      const parsed = parseQuantity(cell, { unit: columns[at]?.unit ?? '' })
      if (!parsed.ok)
        return { ok: false, reason: `Line ${index + 1}: ${parsed.reason} Accepted: ${parsed.accepted}.` }
      row.push(parsed.value)
    }
    rows.push(row)
  }
  return { ok: true, rows }
}
