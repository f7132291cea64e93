import { useMemo, type ReactNode } from 'react'
import { TextButton } from '#client/components/buttons.tsx'
import type { Cause, Comparison, Effect } from '#shared/studies/compare.ts'
import type { DraftDocument } from '../draft/paths.ts'
import { usePlanner } from '../planner-context.tsx'
import { Fold } from '../steps/fold.tsx'
import {
  answerText,
  causeLabel,
  causeText,
  changeText,
  isBetter,
  splitCauses,
  splitEffects,
} from './compare-words.ts'
import { gutterOf, LinkLines } from './link-lines.tsx'

interface ComparisonTableProps {
  comparison: Comparison
  kept: DraftDocument
}

/** Three columns: what, kept, now. Causes first, then the answers that moved, joined where one edit alone explains it. */
export function ComparisonTable({ comparison, kept }: ComparisonTableProps) {
  const { causes, untried } = comparison
  const { shown: effects, faint } = splitEffects(comparison.effects)
  const { shown, idle } = splitCauses(causes)
  const links = useMemo(() => linksOf(comparison), [comparison])
  return (
    <>
      <div
        className="plan-table-region"
        role="region"
        aria-label="Difference of the two variants"
        tabIndex={0}
      >
        <div className="compare" style={{ paddingLeft: gutterOf(links.length) + GAP }}>
          <LinkLines links={links} />
          <table className="plan-table compare-table">
            <caption className="sr-only">What differs, in the kept variant and now</caption>
            <thead>
              <tr>
                <th scope="col">What</th>
                <th scope="col">Kept</th>
                <th scope="col">Now</th>
              </tr>
            </thead>
            <tbody>
              <tr>
                <th scope="rowgroup" colSpan={3} className="compare-group">
                  {shown.length === 1 ? '1 edit' : `${shown.length} edits`}
                </th>
              </tr>
              {shown.map((cause) => (
                <CauseRow key={cause.path} cause={cause} kept={kept} />
              ))}
            </tbody>
            <tbody>
              <tr>
                <th scope="rowgroup" colSpan={3} className="compare-group">
                  {effects.length === 0
                    ? 'No answer moved noticeably'
                    : effects.length === 1
                      ? '1 answer moved'
                      : `${effects.length} answers moved`}
                </th>
              </tr>
              {effects.map((effect) => (
                <EffectRow key={effect.id} effect={effect} comparison={comparison} />
              ))}
            </tbody>
          </table>
        </div>
      </div>
      {untried > 0 && (
        <p className="field-note">
          {untried === 1 ? '1 edit was' : `${untried} edits were`} not tried alone: what they move is not
          joined to them.
        </p>
      )}
      {faint.length > 0 && (
        <Fold
          title={
            faint.length === 1
              ? '1 answer not noticeably affected'
              : `${faint.length} answers not noticeably affected`
          }
          say="moved by less than 0.1 % of their figure"
        >
          <FoldedTable caption="Answers that moved by less than 0.1 %">
            {faint.map((effect) => (
              <EffectRow key={effect.id} effect={effect} comparison={comparison} />
            ))}
          </FoldedTable>
        </Fold>
      )}
      {idle.length > 0 && (
        <Fold title={idle.length === 1 ? '1 edit without effect' : `${idle.length} edits without effect`}>
          <FoldedTable caption="Edits that move no answer by themselves">
            {idle.map((cause) => (
              <CauseRow key={cause.path} cause={cause} kept={kept} />
            ))}
          </FoldedTable>
        </Fold>
      )}
    </>
  )
}

/** A table of the same columns inside a fold. */
function FoldedTable({ caption, children }: { caption: string; children: ReactNode }) {
  return (
    <table className="plan-table compare-table">
      <caption className="sr-only">{caption}</caption>
      <thead>
        <tr>
          <th scope="col">What</th>
          <th scope="col">Kept</th>
          <th scope="col">Now</th>
        </tr>
      </thead>
      <tbody>{children}</tbody>
    </table>
  )
}

/** Between the lines and the words that they join, px. */
const GAP = 5

const causeKey = (path: string): string => `cause ${path}`
const effectKey = (id: string): string => `effect ${id}`

function linksOf({ causes, effects: all, links }: Comparison) {
  const inSight = new Set(splitEffects(all).shown.map(({ id }) => id))
  return causes.flatMap(({ path }) => {
    const effects = links
      .filter((link) => link.path === path && inSight.has(link.effect))
      .map(({ effect }) => effectKey(effect))
    return effects.length === 0 ? [] : [{ cause: causeKey(path), effects }]
  })
}

function CauseRow({ cause, kept }: { cause: Cause; kept: DraftDocument }) {
  const { state, dispatch, goTo, readOnly, sensorKind } = usePlanner()
  const { path } = cause
  const label = causeLabel(path, sensorKind)
  return (
    <tr data-link={causeKey(path)}>
      <th scope="row">
        <TextButton onClick={() => goTo(path)}>{label}</TextButton>
      </th>
      <td>{causeText(path, cause.a, kept, sensorKind)}</td>
      <td>
        {causeText(path, cause.b, state.document, sensorKind)}{' '}
        {readOnly === null && (
          <TextButton
            onClick={() =>
              dispatch({ type: 'set', changes: [{ path, value: cause.a }], label: `${label} taken back` })
            }
          >
            Take back<span className="sr-only"> the edit of {label}</span>
          </TextButton>
        )}
      </td>
    </tr>
  )
}

function EffectRow({ effect, comparison }: { effect: Effect; comparison: Comparison }) {
  const { sensorKind } = usePlanner()
  const by = comparison.links.filter((link) => link.effect === effect.id)
  return (
    <tr data-link={effectKey(effect.id)}>
      <th scope="row">
        {effect.label}
        {by.length > 0 && comparison.causes.length > 1 && (
          <small>by {by.map(({ path }) => causeLabel(path, sensorKind)).join(', or by ')} alone</small>
        )}
      </th>
      <td>{answerText(effect, effect.a)}</td>
      <td>
        {answerText(effect, effect.b)}
        <small data-better={isBetter(effect) ?? undefined}>{changeText(effect)}</small>
      </td>
    </tr>
  )
}
