import { renderToStaticMarkup } from 'react-dom/server'
import { MemoryRouter } from 'react-router-dom'
import { describe, expect, it } from 'vitest'
import { Button } from '#client/components/buttons.tsx'
import { RevisionMark, revisionWords, RoomMark, type RevisionState } from '#client/components/marks.tsx'
import { SelectField } from '#client/components/select-field.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { TitleBlock } from '#client/components/title-block.tsx'
import { ValueField } from '#client/components/value-field.tsx'
import { KeyTables, keyTable } from '#client/components/keys.tsx'
import type { RoomState } from '#shared/design/plan.ts'

const shapes = (markup: string) => markup.replace(/class="[^"]*"/g, '')

describe('marks', () => {
  it('differ by shape, not only by colour', () => {
    const rooms: RoomState[] = ['clear', 'tight', 'over', 'unknown']
    const revisions = Object.keys(revisionWords) as RevisionState[]
    const drawn = [
      ...rooms.map((state) => renderToStaticMarkup(<RoomMark state={state} />)),
      ...revisions.map((state) => renderToStaticMarkup(<RevisionMark state={state} />)),
    ].map(shapes)
    expect(new Set(drawn).size).toBe(drawn.length)
  })

  it('are silent beside their words and speak where they stand alone', () => {
    expect(renderToStaticMarkup(<RoomMark state="over" />)).toContain('aria-hidden="true"')
    expect(renderToStaticMarkup(<RoomMark state="over" label="Problem" />)).toContain('aria-label="Problem"')
  })
})

describe('fields', () => {
  it('name their help, their echo and their error', () => {
    const markup = renderToStaticMarkup(
      <ValueField
        id="r"
        label="Resistor"
        unit="Ω"
        value={4700}
        onChange={() => undefined}
        help="At 23 °C"
        error="Too small."
      />,
    )
    expect(markup).toContain('for="r"')
    expect(markup).toContain('aria-describedby="r-help r-echo r-error"')
    expect(markup).toContain('aria-invalid="true"')
    expect(markup).toContain('id="r-error"')
    expect(markup).toContain('value="4.7\u00a0k"')
    expect(markup).not.toContain('type="number"')
  })

  it('show a kept text that cannot be read, with the reason and what is accepted', () => {
    const markup = renderToStaticMarkup(
      <ValueField id="v" label="Volts" unit="V" value={5} text="5 x" onChange={() => undefined} />,
    )
    expect(markup).toContain('value="5 x"')
    expect(markup).toContain('not known here')
    expect(markup).toContain('such as 0.35')
  })

  it('put a question with both readings as controls', () => {
    const markup = renderToStaticMarkup(
      <ValueField id="v" label="Volts" unit="V" value={5} text="4.096" onChange={() => undefined} />,
    )
    expect(markup.match(/<button/g)).toHaveLength(2)
    expect(markup).toContain('4096\u00a0V</button>')
  })

  it('may stand inside a sentence: no block elements', () => {
    const markup = renderToStaticMarkup(
      <>
        <ValueField label="gain" layout="inline" unit="V/V" value={3.75} onChange={() => undefined} />
        <SelectField
          label="from"
          value="a"
          options={[{ value: 'a', label: 'A' }]}
          onChange={() => undefined}
        />
        <TextField label="Name" error="Type it." />
      </>,
    )
    expect(markup).not.toMatch(/<(div|p|section|ul)\b/)
  })
})

describe('controls', () => {
  it('say why they are inactive and stay reachable', () => {
    const markup = renderToStaticMarkup(<Button inactive="Adding takes an engineer.">Add</Button>)
    expect(markup).toContain('aria-disabled="true"')
    expect(markup).toContain('aria-description="Adding takes an engineer."')
    expect(markup).not.toContain(' disabled')
    expect(markup).toContain('type="button"')
  })

  it('show a dash for a value that is awaited', () => {
    const markup = renderToStaticMarkup(
      <MemoryRouter>
        <TitleBlock cells={[{ label: 'Project', value: null }]} />
      </MemoryRouter>,
    )
    expect(markup).toContain('class="dash"')
    expect(markup).toContain('not there yet')
  })

  it('list every key once for a place', () => {
    const markup = renderToStaticMarkup(<KeyTables level="h2" />)
    for (const section of keyTable) {
      expect(markup).toContain(section.place)
      expect(new Set(section.keys.map((entry) => entry.keys)).size).toBe(section.keys.length)
    }
  })
})
