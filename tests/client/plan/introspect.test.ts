import { describe, expect, it } from 'vitest'
import { fieldAt, leavesOf, type FieldSpec } from '#client/features/plan/form/introspect.ts'
import { designSchema } from '#shared/design/schema.ts'
import { sensorKinds } from '#shared/sensors/index.ts'

const leaf = (path: string, kind = 'voltage'): FieldSpec => fieldAt(path, kind)

describe('the form read from the schema', () => {
  it('takes label, unit and accepted range of a number from its schema', () => {
    expect(leaf('sensor.output.low')).toMatchObject({
      control: 'number',
      label: 'Sensor output, low',
      unit: 'V',
      required: true,
    })
    expect(leaf('parts.resistors.tolerance')).toMatchObject({
      control: 'number',
      display: 'percent',
      required: false,
      preset: 0.001,
    })
    expect(leaf('converter.bits')).toMatchObject({ accepted: 'a whole number from 4 up to 32' })
  })

  it('tells choices, switches, text, lists and tables apart', () => {
    expect(leaf('sensor.wiring')).toMatchObject({
      control: 'choice',
      options: ['single-ended', 'differential'],
    })
    expect(leaf('sensor.floating')).toMatchObject({ control: 'flag', preset: false })
    expect(leaf('sensor.quantity.name')).toMatchObject({ control: 'text', longest: 60 })
    expect(leaf('parts.resistors.stock')).toMatchObject({ control: 'numbers', unit: 'Ω', longest: 2000 })
    expect(leaf('parts.instrumentation.bandwidth')).toMatchObject({
      control: 'table',
      columns: [
        { label: 'Gain', unit: 'V/V' },
        { label: 'Bandwidth', unit: 'Hz' },
      ],
    })
  })

  it('edits the object form of a key that may also be a plain number', () => {
    expect(leaf('sensor.excitation', 'bridge')).toMatchObject({ control: 'group', required: true })
    expect(leaf('sensor.excitation.voltage', 'bridge')).toMatchObject({ control: 'number', unit: 'V' })
  })

  it('refuses a key that the design does not have', () => {
    expect(() => leaf('sensor.colour')).toThrow('sensor.colour')
  })

  it.each(sensorKinds.map((kind) => [kind.kind, kind] as const))(
    'finds a control with a label for every key of the %s sensor',
    (name, kind) => {
      const group = fieldAt('sensor', name)
      const leaves = leavesOf(group)
      expect(leaves.length).toBeGreaterThan(10)
      for (const spec of leaves) {
        expect(spec.control, spec.path).not.toBe('none')
        expect(spec.label.length, spec.path).toBeGreaterThan(1)
      }
      for (const key of kind.form) expect(() => fieldAt(`sensor.${key}`, name)).not.toThrow()
    },
  )

  it('finds a control for every key of the other sections', () => {
    for (const section of Object.keys(designSchema.shape).filter(
      (key) => !['format', 'notes', 'choose', 'sensor'].includes(key),
    ))
      for (const spec of leavesOf(fieldAt(section, 'voltage')))
        if (spec.path !== 'parts.amplifier.typical') expect(spec.control, spec.path).not.toBe('none')
  })
})
