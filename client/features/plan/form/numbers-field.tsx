import { TextArea } from '#client/components/text-field.tsx'
import { formatEditable } from '#shared/units/format-quantity.ts'
import { parseQuantity } from '#shared/units/parse-quantity.ts'
import { useField } from './use-field.ts'

interface NumbersFieldProps {
  path: string
  label: string
  unit: string
  help?: string
}

/** A list of values as text: one after another, parted by spaces, semicolons or line ends. */
export function NumbersField({ path, label, unit, help }: NumbersFieldProps) {
  const field = useField(path)
  const values = Array.isArray(field.value) ? (field.value as number[]) : []
  const text =
    field.typed?.text ?? values.map((value) => formatEditable(value, unit).replace(/\s/g, '')).join('  ')
  return (
    <TextArea
      id={field.id}
      label={label}
      value={text}
      rows={2}
      disabled={field.disabled}
      help={
        help ??
        `Empty: every value of the series. Otherwise the values at hand, such as 1k 2k2 4k7${unit === 'F' ? ' as farads: 1n 2n2 4n7' : ''}.`
      }
      error={field.typed?.reason ?? field.error}
      onChange={(event) => {
        const next = event.target.value
        const read = readNumbers(next, unit)
        if (read.ok) field.type(read.values.length > 0 ? read.values : undefined, next, label)
        else field.misread(next, read.reason, label)
      }}
      onFocus={field.enter}
      onBlur={field.leave}
    />
  )
}

/** Reads the list; the first entry that cannot be read is named. */
export function readNumbers(
  text: string,
  unit: string,
): { ok: true; values: number[] } | { ok: false; reason: string } {
  const values: number[] = []
  for (const entry of text.split(/[\s;]+/).filter(Boolean)) {
    const parsed = parseQuantity(entry, { unit })
    if (!parsed.ok) return { ok: false, reason: `“${entry}”: ${parsed.reason} Accepted: ${parsed.accepted}.` }
    values.push(parsed.value)
  }
  return { ok: true, values }
}
