import type { ReactNode } from 'react'
import { Checkbox } from '#client/components/checkbox.tsx'
import { SelectField } from '#client/components/select-field.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { ValueField } from '#client/components/value-field.tsx'
import type { SeriesName } from '#shared/parts/series.ts'
import { formatEditable } from '#shared/units/format-quantity.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'
import { appliesTo } from './companions.ts'
import { choiceLabel } from './labels.ts'
import { isAsked, type FieldSpec } from './introspect.ts'
import { NumbersField } from './numbers-field.tsx'
import { TableField } from './table-field.tsx'
import { useField } from './use-field.ts'

export interface SchemaFieldProps {
  path: string
  /** In place of the schema's own label. */
  label?: string
  layout?: 'stacked' | 'inline'
  hideLabel?: boolean
  hint?: ReactNode
  help?: string
  /** What holds while the field is empty. */
  absent?: string
  width?: number
  series?: SeriesName
  /** Unit that the schema cannot know: the measurand's. */
  unit?: string
  /** Of a choice: those that can be meant here. */
  only?: readonly string[]
  /** Why a number that can be read is not taken into the design; null where it is. */
  refuse?(value: number): string | null
  /** Groups inside groups are not ruled off again. */
  nested?: boolean
}

/** The control of one key of the design, whatever kind the key is of. */
export function SchemaField(props: SchemaFieldProps) {
  const { state } = usePlanner()
  const { spec } = useField(props.path)
  if (!appliesTo(props.path, state.document)) return null
  switch (spec.control) {
    case 'number':
      return <NumberField {...props} />
    case 'choice':
      return (
        <ChoiceField
          {...props}
          options={spec.options.filter((option) => props.only?.includes(option) ?? true)}
        />
      )
    case 'flag':
      return <FlagField {...props} />
    case 'text':
      return <WordsField {...props} />
    case 'numbers':
      return (
        <NumbersField
          path={props.path}
          label={props.label ?? spec.label}
          unit={props.unit ?? spec.unit}
          {...(props.help ? { help: props.help } : {})}
        />
      )
    case 'table':
      return <TableField path={props.path} label={props.label ?? spec.label} columns={spec.columns} />
    case 'group':
      return <GroupField {...props} fields={spec.fields} />
    case 'none':
      return null
  }
}

/** What the schema puts in, or that the plan chooses, for an empty field. */
export function presetText(spec: FieldSpec, unit: string): string | undefined {
  if (typeof spec.preset === 'number') {
    if (spec.control !== 'number') return undefined
    // A bound as large as this stands for "none".
    if (Math.abs(spec.preset) >= 1e12 && unit === 'Ω') return 'none'
    return formatEditable(spec.preset, unit, { display: spec.display })
  }
  return undefined
}

function NumberField({
  path,
  label,
  layout,
  hideLabel,
  hint,
  help,
  absent,
  width,
  series,
  unit: given,
  refuse,
}: SchemaFieldProps) {
  const field = useField(path)
  const { quantity, state, sensorKind } = usePlanner()
  const { spec } = field
  if (spec.control !== 'number') return null
  const name = label ?? spec.label
  // The design does not store the measurand's unit with every figure in it, so fields about it take it from there.
  const unit = given ?? (spec.unit === '' && name.startsWith('Measurand') ? quantity.unit : spec.unit)
  const preset = absent ?? presetText(spec, unit)
  const isOpen =
    absent === undefined && field.value === undefined && isAsked(spec, sensorKind, state.document)
  return (
    <ValueField
      id={field.id}
      label={name}
      unit={unit}
      display={spec.display}
      value={typeof field.value === 'number' ? field.value : null}
      required={isOpen}
      disabled={field.disabled}
      {...(field.typed ? { text: field.typed.text } : {})}
      {...(layout ? { layout } : {})}
      {...(hideLabel ? { hideLabel } : {})}
      {...(help ? { help } : {})}
      {...(width ? { width } : {})}
      {...(series ? { standardSeries: series } : {})}
      {...(field.error ? { error: field.error } : {})}
      {...(refuse ? { check: refuse } : {})}
      {...(preset ? { placeholder: preset } : {})}
      hint={hint ?? (isOpen ? 'Open' : undefined)}
      onChange={(value, text) => {
        const reason = value === null ? null : (refuse?.(value) ?? null)
        if (reason === null) field.type(value ?? undefined, text, name)
        else field.misread(text, reason, name)
      }}
      onInvalid={(text, reason) => field.misread(text, reason, name)}
      onFocus={field.enter}
      onBlur={field.leave}
    />
  )
}

function ChoiceField({
  path,
  label,
  layout,
  hideLabel,
  help,
  absent,
  options,
}: SchemaFieldProps & { options: readonly string[] }) {
  const field = useField(path)
  const { spec } = field
  const name = label ?? spec.label
  const preset = typeof spec.preset === 'string' ? spec.preset : null
  // An absent choice with a default shows the default; one without can also be left to itself.
  const value = typeof field.value === 'string' ? field.value : (preset ?? '')
  const listed = options.map((option) => ({ value: option, label: choiceLabel(option) }))
  const shown = preset === null ? [{ value: '', label: absent ?? absentWords(spec) }, ...listed] : listed
  return (
    <SelectField
      id={field.id}
      label={name}
      value={value}
      options={shown}
      disabled={field.disabled}
      {...(layout ? { layout } : {})}
      {...(hideLabel ? { hideLabel } : {})}
      {...(help ? { help } : {})}
      {...(field.error ? { error: field.error } : {})}
      onChange={(chosen) => field.choose(chosen === '' ? undefined : chosen, name)}
    />
  )
}

/** What it means that nothing is chosen. */
function absentWords(spec: FieldSpec): string {
  if (spec.path.endsWith('.same')) return 'a source of its own'
  return spec.required ? 'choose' : 'not stated'
}

function FlagField({ path, label, help }: SchemaFieldProps) {
  const field = useField(path)
  const name = label ?? field.spec.label
  const preset = field.spec.preset === true
  return (
    <Checkbox
      id={field.id}
      label={name}
      checked={typeof field.value === 'boolean' ? field.value : preset}
      disabled={field.disabled}
      {...(help ? { help } : {})}
      onChange={(checked) => field.choose(checked === preset ? undefined : checked, name)}
    />
  )
}

function WordsField({ path, label, layout, hideLabel, help, width }: SchemaFieldProps) {
  const field = useField(path)
  const { spec } = field
  if (spec.control !== 'text') return null
  const name = label ?? spec.label
  const text = field.typed?.text ?? (typeof field.value === 'string' ? field.value : '')
  // The name of a part has a default; a unit may be empty; other names may not.
  const mayBeEmpty = !spec.required || path.endsWith('.unit')
  return (
    <TextField
      id={field.id}
      label={name}
      value={text}
      maxLength={spec.longest}
      disabled={field.disabled}
      required={!mayBeEmpty}
      {...(layout ? { layout } : {})}
      {...(hideLabel ? { hideLabel } : {})}
      {...(help ? { help } : {})}
      {...(width ? { size: width } : {})}
      {...(typeof spec.preset === 'string' ? { placeholder: spec.preset } : {})}
      error={field.typed?.reason ?? field.error}
      onChange={(event) => {
        const next = event.target.value
        if (next.trim() !== '') field.type(next, next, name)
        else if (mayBeEmpty) field.type(spec.required ? '' : undefined, next, name)
        else field.misread(next, `${name} is needed: type at least one character.`, name)
      }}
      onFocus={field.enter}
      onBlur={field.leave}
    />
  )
}

function GroupField({
  path,
  label,
  help,
  nested,
  fields,
}: SchemaFieldProps & { fields: readonly FieldSpec[] }) {
  const field = useField(path)
  const isRange = fields.length === 2 && fields.every((inner) => /\.(low|high)$/.test(inner.path))
  return (
    <fieldset id={fieldId(path)} className={`plan-group${nested ? ' nested' : ''}${isRange ? ' range' : ''}`}>
      <legend>{label ?? field.spec.label}</legend>
      {help && <p className="field-note">{help}</p>}
      {field.error && <p className="plan-fault">{field.error}</p>}
      <div className="plan-fields">
        {fields.map((inner) => (
          <SchemaField
            key={inner.path}
            path={inner.path}
            nested
            // Inside a range the group's name says of what.
            {...(isRange ? { label: inner.path.endsWith('.low') ? 'low' : 'high' } : {})}
          />
        ))}
      </div>
    </fieldset>
  )
}
