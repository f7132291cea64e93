import { useId } from 'react'

interface SegmentsProps<T extends string> {
  legend: string
  value: T
  options: readonly { value: T; words: string }[]
  onChange(value: T): void
}

/** One of a few, side by side. */
export function Segments<T extends string>({ legend, value, options, onChange }: SegmentsProps<T>) {
  const name = useId()
  return (
    <fieldset className="d-segments">
      <legend>{legend}</legend>
      {options.map((option) => (
        <label key={option.value}>
          <input
            type="radio"
            name={name}
            value={option.value}
            checked={option.value === value}
            onChange={() => onChange(option.value)}
          />
          {option.words}
        </label>
      ))}
    </fieldset>
  )
}
