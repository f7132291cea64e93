import { useId, useMemo, useState, type KeyboardEvent, type ReactNode } from 'react'
import { Checkbox } from '#client/components/checkbox.tsx'
import { usePreferences } from '#client/lib/preferences.ts'
import type { Level } from '#shared/design/plan.ts'
import { describeLevels, layoutLevelDiagram, type LevelMode } from '#shared/drawings/level-diagram.ts'
import { levelTable, type FigureOptions, type Measurand } from '#shared/drawings/level-figures.ts'
import type { MarkName } from '#shared/drawings/level-marks.ts'
import { sheetMeasures } from '#shared/drawings/level-scale.ts'
import { chosenMark, moveChoice, type Choice } from './level-choice.ts'
import { LevelBlocks } from './level-blocks.tsx'
import { LevelStrip } from './level-strip.tsx'
import { LevelFigures } from './level-table.tsx'
import { useWidth } from './use-width.ts'

export interface LevelDiagramProps {
  levels: readonly Level[]
  quantity: Measurand
  /** Node whose stage is being edited: `S1`. */
  editing?: string | null
  /** The last good levels are shown, as something typed cannot be read. */
  stale?: boolean
  /** Room to keep, as a fraction of the linear region. */
  rule?: number
  /** Levels of the variant that it is held against, drawn dotted. */
  kept?: readonly Level[]
  /** More choices beside the scale and the worst case. */
  children?: ReactNode
  /** Enter or a double click on a mark: go to the field that sets it. */
  onGo?(node: string, mark: MarkName): void
}

/** Level diagram of a chain with its table: what stays in sight at every step of a plan. */
export function LevelDiagram(props: LevelDiagramProps) {
  const { levels, quantity, editing, stale, rule, kept, children, onGo } = props
  const id = useId()
  const { decimalSign, letterKeys } = usePreferences()
  const [mode, setMode] = useState<LevelMode>('share')
  const [worst, setWorst] = useState(true)
  const [choice, setChoice] = useState<Choice | null>(null)

  const [holder, width] = useWidth(0, 2000, 0)
  const column = columnFor(width, levels.length)
  const measures = useMemo(() => ({ ...sheetMeasures, column, bay: bayFor(column) }), [column])

  const figures = useMemo<FigureOptions>(
    () => ({
      worst,
      quantity,
      ...(rule === undefined ? {} : { rule }),
      ...(decimalSign ? { decimalSign } : {}),
    }),
    [worst, quantity, rule, decimalSign],
  )
  const drawing = useMemo(
    () =>
      layoutLevelDiagram(levels, {
        ...figures,
        mode,
        editing: editing ?? null,
        measures,
        ...(kept ? { kept } : {}),
      }),
    [levels, figures, mode, editing, measures, kept],
  )
  const table = useMemo(() => levelTable(levels, figures), [levels, figures])
  const chosen = chosenMark(drawing.bays, choice)
  const go = (at: Choice) => {
    const found = chosenMark(drawing.bays, at)
    if (found) onGo?.(found.bay.node, found.mark.name)
  }

  const handleKey = (event: KeyboardEvent<HTMLDivElement>) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return
    const moved = moveChoice(drawing.bays, choice, event.key)
    const letter = letterKeys ? event.key.toLowerCase() : ''
    if (moved) setChoice(moved)
    else if (event.key === 'Escape' && choice) setChoice(null)
    else if (event.key === 'Enter' && choice) go(choice)
    else if (letter === 'w') setWorst(!worst)
    else if (letter === 'v') setMode(mode === 'share' ? 'volts' : 'share')
    else if (letter === 't') document.getElementById(`${id}-table`)?.focus()
    else return
    event.preventDefault()
  }

  return (
    <figure className={`d-figure${stale ? ' d-stale' : ''}`} aria-labelledby={`${id}-title`}>
      <div className="d-head">
        <h2 id={`${id}-title`}>Level diagram</h2>
        <figcaption className="d-caption">{drawing.caption}</figcaption>
        <div className="d-choices">
          <fieldset className="d-segments d-wide">
            <legend>Scale</legend>
            {modes.map(({ value, words }) => (
              <label key={value}>
                <input
                  type="radio"
                  name={`${id}-scale`}
                  value={value}
                  checked={mode === value}
                  onChange={() => setMode(value)}
                />
                {words}
              </label>
            ))}
          </fieldset>
          <Checkbox label="Worst case" checked={worst} onChange={setWorst} />
          {children}
        </div>
      </div>
      {stale ? (
        <p className="d-note">
          These are the last good levels: something typed cannot be read yet. They follow again when it can.
        </p>
      ) : null}
      <div ref={holder} className="d-wide d-scroll">
        <div
          className="d-keys"
          role="application"
          tabIndex={0}
          aria-roledescription="level diagram"
          aria-label={describeLevels(levels, figures)}
          aria-describedby={`${id}-keys`}
          onKeyDown={handleKey}
        >
          <LevelStrip
            drawing={drawing}
            gutter={sheetMeasures.gutter}
            column={column}
            choice={choice}
            onChoose={setChoice}
            onGo={go}
          />
        </div>
        <LevelFigures
          id={`${id}-table`}
          table={table}
          caption={`Levels at each node${worst ? ', worst case over every board' : ''}`}
          gutter={sheetMeasures.gutter}
          column={column}
        />
        <p className="d-readout" aria-live="polite">
          {chosen ? <strong>{chosen.mark.words}</strong> : null}
        </p>
        <p className="d-hidden" id={`${id}-keys`}>
          {letterKeys ? `${arrowKeys} ${singleKeys}` : arrowKeys}
        </p>
      </div>
      <LevelBlocks levels={levels} table={table} options={figures} />
    </figure>
  )
}

/** Widest that a bay's column grows on a wide page, px: beyond, neighbours would not be read together. */
const WIDEST = 320

/** Narrowest that it becomes, px: the opening still holds the figure of its room. */
const NARROWEST = 172

/** Few nodes share the width of the page between them; those that do not fit become narrower, then scroll. */
const columnFor = (width: number, nodes: number): number =>
  width === 0
    ? sheetMeasures.column
    : Math.floor(Math.min(WIDEST, Math.max(NARROWEST, (width - sheetMeasures.gutter) / Math.max(1, nodes))))

/** A narrow column takes from the opening, not from the figures beside it. */
const bayFor = (column: number): number => sheetMeasures.bay - Math.max(0, sheetMeasures.column - column)

const modes: { value: LevelMode; words: string }[] = [
  { value: 'share', words: 'Share of region' },
  { value: 'volts', words: 'Volts' },
]

const arrowKeys =
  'Left and Right choose a node, Up and Down a level or limit, Enter goes to the field that sets it, Escape leaves.'
const singleKeys = 'W worst case, V volts, T table.'
