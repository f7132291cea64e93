import { useEffect, useId, useRef, useState, type KeyboardEvent, type ReactNode } from 'react'
import { nearest, standardValues, type SeriesName } from '#shared/parts/series.ts'
import { acceptedFor, isFormula, type Choice } from '#shared/units/parse-quantity.ts'
import { parseFormula } from '#shared/units/parse-formula.ts'
import { stepQuantity } from '#shared/units/step-quantity.ts'
import { setPreferences, usePreferences } from '#client/lib/preferences.ts'
import { describedBy, Field, type FieldFrame } from './field.tsx'
import {
  asksDecimalSign,
  followOutside,
  readShown,
  startText,
  textOf,
  unitSuffix,
  type FieldUnit,
  type Reading,
} from './value-field-state.ts'

export interface ValueFieldProps extends FieldFrame {
  id?: string
  /** SI unit, or the measurand's own; '' for a plain ratio. */
  unit: string
  /** SI value (a fraction with `display="percent"`); null: nothing set. */
  value: number | null
  /** Each keystroke that can be read; null with an empty text. The text is as typed. */
  onChange(value: number | null, text: string): void
  /** Each keystroke that cannot be read. */
  onInvalid?(text: string, reason: string): void
  /** Typed text kept elsewhere (undo, stored work): shown in place of the value's own text. */
  text?: string
  onFocus?(): void
  onBlur?(): void
  display?: 'percent' | 'plain'
  /** Up and Down then walk along this series; `true` along E96. */
  standardSeries?: SeriesName | boolean
  /** Line under the field while there is nothing else to say. */
  hint?: ReactNode
  /** Shown behind the text instead of the unit. */
  suffix?: string
  placeholder?: string
  /** What is wrong with a value that can be read, or null. */
  check?(value: number): string | null
  /** Width of the box in characters. */
  width?: number
  inputMode?: 'text' | 'decimal'
}

/**
 * The number field. Typed text is left alone; a second line says how it was read, or what is wrong. Ctrl+Z is not
 * touched: undo belongs to the plan. Escape takes back what was typed since the field was entered.
 */
export function ValueField(props: ValueFieldProps) {
  const { unit, value, display, standardSeries, suffix, hint, check, disabled, required } = props
  const ownId = useId()
  const id = props.id ?? ownId
  const { decimalSign } = usePreferences()
  const fieldUnit: FieldUnit = {
    unit,
    ...(display ? { display } : {}),
    ...(decimalSign ? { decimalSign } : {}),
  }

  const [state, setState] = useState(() => startText(value, props.text, fieldUnit))
  const followed = followOutside(state, value, props.text, fieldUnit)
  if (followed !== state) setState(followed)
  const { text } = followed

  const [focused, setFocused] = useState(false)
  const [touched, setTouched] = useState(false)
  const [worked, setWorked] = useState<{ text: string; reading: Reading } | null>(null)
  const atFocus = useRef({ text, value })
  const latest = useRef(text)
  useEffect(() => {
    latest.current = text
  }, [text])

  const direct = readShown(text, value, fieldUnit)
  const reading = direct.kind === 'formula' && worked?.text === text ? worked.reading : direct

  const report = (next: string, read: Reading) => {
    if (read.kind === 'value') {
      setState({ text: next, value: read.value, given: props.text })
      props.onChange(read.value, next)
    } else if (read.kind === 'empty') {
      setState({ text: next, value: null, given: props.text })
      props.onChange(null, next)
    } else if (read.kind === 'refused') {
      props.onInvalid?.(next, read.reason)
    }
  }

  /** `meant`: the value that a text stands for which the program wrote. */
  const type = (next: string, meant: number | null = value) => {
    setTouched(true)
    latest.current = next
    setState((s) => ({ ...s, text: next }))
    const read = readShown(next, meant, fieldUnit)
    if (read.kind !== 'formula') return report(next, read)
    void parseFormula(next, fieldUnit).then((result) => {
      if (latest.current !== next) return
      const outcome: Reading = result.ok
        ? { kind: 'value', value: result.value, readAs: result.readAs }
        : { kind: 'refused', reason: result.reason, accepted: result.accepted, choices: result.choices ?? [] }
      setWorked({ text: next, reading: outcome })
      report(next, outcome)
    })
  }

  const take = (choice: Choice) => {
    if (choice.decimalSign === undefined) return type(textOf(choice.value, fieldUnit), choice.value)
    // Every field reads by this sign from now on, this one too.
    setPreferences({ decimalSign: choice.decimalSign })
    report(text, { kind: 'value', value: choice.value, readAs: choice.label })
  }

  const handleKey = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return
    if (event.key === 'Enter') setTouched(true)
    if (event.key === 'Escape' && text !== atFocus.current.text) {
      event.stopPropagation()
      type(atFocus.current.text, atFocus.current.value)
    }
    if (event.key !== 'ArrowUp' && event.key !== 'ArrowDown') return
    event.preventDefault()
    const series = standardSeries === true ? 'E96' : standardSeries
    const step = stepQuantity(text, value, {
      ...fieldUnit,
      // What the program wrote has a point.
      ...(value !== null && text === textOf(value, fieldUnit) && !decimalSign
        ? { decimalSign: '.' as const }
        : {}),
      direction: event.key === 'ArrowUp' ? 1 : -1,
      large: event.shiftKey,
      ...(series && value !== null && value > 0 ? { standard: around(series, value) } : {}),
    })
    if (step) type(step.text, step.value)
  }

  // A question is put at once, so that Tab leads to its answers; a fault only when the field is left.
  const asks = reading.kind === 'refused' && reading.choices.length > 0
  const settled = touched && !focused
  const refusal = reading.kind === 'refused' && !asks && (settled || !touched) ? reading : null
  const misfit = reading.kind === 'value' && !focused ? (check?.(reading.value) ?? null) : null
  const missing =
    required === true && settled && reading.kind === 'empty' ? `Type ${acceptedFor(fieldUnit)}.` : null
  const error = props.error ?? (refusal ? `${refusal.reason} Type ${refusal.accepted}.` : (misfit ?? missing))
  const echo = settled && reading.kind === 'value' && !error ? reading.readAs : null
  const isShownAsValue = isFormula(text) && !focused && value !== null && reading.kind !== 'refused'

  return (
    <Field
      {...frameOf(props)}
      id={id}
      error={error}
      notes={
        <span id={`${id}-echo`} className="field-note mt-0.5 block empty:hidden">
          {asks && <Question choices={reading.choices} reason={reading.reason} onTake={take} />}
          {!asks && echo !== null && <>Read as {echo}</>}
          {!asks && echo === null && !error && hint}
        </span>
      }
    >
      <span
        className="field-box"
        style={props.width === undefined ? undefined : { width: `${props.width}ch` }}
      >
        <input
          id={id}
          type="text"
          inputMode={props.inputMode ?? 'text'}
          autoComplete="off"
          autoCapitalize="none"
          spellCheck={false}
          placeholder={props.placeholder}
          value={isShownAsValue ? textOf(Number(value.toPrecision(5)), fieldUnit) : text}
          disabled={disabled}
          required={required}
          aria-invalid={error || asks ? true : undefined}
          aria-describedby={describedBy(id, {
            help: props.help !== undefined,
            echo: true,
            error: Boolean(error),
          })}
          onChange={(event) => type(event.target.value)}
          onKeyDown={handleKey}
          onFocus={() => {
            atFocus.current = { text, value }
            setFocused(true)
            props.onFocus?.()
          }}
          onBlur={() => {
            setFocused(false)
            props.onBlur?.()
          }}
        />
        <Suffix text={suffix ?? unitSuffix(unit, display)} />
      </span>
    </Field>
  )
}

function Suffix({ text }: { text: string }) {
  return text === '' ? null : <span className="flex-none text-12 text-ink-3">{text}</span>
}

interface QuestionProps {
  reason: string
  choices: Choice[]
  onTake(choice: Choice): void
}

/** Both readings as controls; nothing is guessed. */
function Question({ reason, choices, onTake }: QuestionProps) {
  return (
    <span className="text-ink-2">
      {reason} {asksDecimalSign(choices) ? 'Which is meant? The answer holds for all fields.' : 'Take'}{' '}
      {choices.map((choice) => (
        <button
          key={choice.label}
          type="button"
          className="text-button mr-3"
          // The field keeps its text while the answer is chosen with a pointer.
          onMouseDown={(event) => event.preventDefault()}
          onClick={() => onTake(choice)}
        >
          {choice.label}
        </button>
      ))}
    </span>
  )
}

/** Two decades to each side: enough for the largest step. */
function around(series: SeriesName, value: number): readonly number[] {
  const centre = nearest(value, series)
  return standardValues(series, centre / 100, centre * 100)
}

function frameOf(props: ValueFieldProps): FieldFrame {
  const { label, hideLabel, layout, help, className } = props
  return {
    label,
    ...(hideLabel === undefined ? {} : { hideLabel }),
    ...(layout === undefined ? {} : { layout }),
    ...(help === undefined ? {} : { help }),
    ...(className === undefined ? {} : { className }),
  }
}
