import { useState } from 'react'
import { TextButton } from '#client/components/buttons.tsx'
import { CurveFigure } from '#client/components/drawings/curve-figure.tsx'
import { usePreferences } from '#client/lib/preferences.ts'
import type { Cure, StabilityEntry } from '#shared/design/plan.ts'
import { loopPlot } from '#shared/drawings/curve-inputs.ts'
import { sentence } from '#shared/note/figures.ts'
import { toStabilityTable } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { companionsOf } from '../../form/companions.ts'
import { usePlanner } from '../../planner-context.tsx'
import { CurvesPart } from '../curves-part.tsx'
import { Fold } from '../fold.tsx'
import { NoteTable } from '../note-table.tsx'
import { Segments } from '../segments.tsx'
import { useTaking } from '../use-taking.ts'

const STABILITY_VERDICT = 'stability-verdict'

/** Phase margin of every amplifier in the real network, and what would steady it. */
export function StabilityPanel({ entries }: { entries: readonly StabilityEntry[] }) {
  const { state, readOnly, candidate } = usePlanner()
  const takeChanges = useTaking(STABILITY_VERDICT)
  const take = (cure: Cure) =>
    takeChanges(
      Object.entries(cure.values).flatMap(([ref, value]) => {
        const path = `choose.values.${ref}`
        return [{ path, value }, ...companionsOf(path, value, state.document, candidate?.arrangement)]
      }),
      `${cure.ref} for stability`,
      `${formatQuantity(cure.value, cure.kind === 'series-resistor' ? 'Ω' : 'F')} taken for ${cure.ref}`,
    )
  const cured = entries.filter((entry) => entry.state !== 'clear')
  return (
    <section aria-label="Stability">
      <h2 id={STABILITY_VERDICT} tabIndex={-1}>
        Stability
      </h2>
      <NoteTable
        caption="Phase margin of each amplifier; under 45° is tight, under 30° over"
        table={toStabilityTable(entries)}
      />
      {cured.map((entry) => (
        <ul key={entry.amplifier} className="plan-lines" aria-label={`What would steady ${entry.amplifier}`}>
          {entry.cures.length === 0 && (
            <li>
              No standard value of a series resistor or feedback capacitor was found that steadies{' '}
              {entry.amplifier}.
            </li>
          )}
          {entry.cures.map((cure) => (
            <li key={cure.kind}>
              {sentence(cure.text)}{' '}
              {readOnly === null && (
                <TextButton onClick={() => take(cure)}>
                  Take {formatQuantity(cure.value, cure.kind === 'series-resistor' ? 'Ω' : 'F')}
                  <span className="sr-only"> for {cure.ref}</span>
                </TextButton>
              )}
            </li>
          ))}
        </ul>
      ))}
      <Fold title="Loop gain" say={entries.map(({ amplifier }) => amplifier).join(', ')}>
        <LoopPlots entries={entries} />
      </Fold>
    </section>
  )
}

function LoopPlots({ entries }: { entries: readonly StabilityEntry[] }) {
  const { decimalSign = '.' } = usePreferences()
  const [asked, setAsked] = useState<string | null>(null)
  return (
    <CurvesPart what="The loop gain">
      {({ loops }) => {
        const loop = loops.find(({ amplifier }) => amplifier === asked) ?? loops[0]
        if (!loop) return <p className="plan-none">There is no loop to draw.</p>
        return (
          <>
            {loops.length > 1 && (
              <Segments
                legend="Amplifier shown"
                value={loop.amplifier}
                options={loops.map(({ amplifier }) => ({ value: amplifier, words: amplifier }))}
                onChange={setAsked}
              />
            )}
            <CurveFigure
              title={`Loop gain of ${loop.amplifier}`}
              caption="loop opened at the output in the real network"
              named={loopPlot(
                loop,
                entries.find(({ amplifier }) => amplifier === loop.amplifier) ?? null,
                decimalSign,
              )}
            />
          </>
        )
      }}
    </CurvesPart>
  )
}
