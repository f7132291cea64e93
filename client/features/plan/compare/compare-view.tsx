import { Button, ButtonLink, TextButton } from '#client/components/buttons.tsx'
import { RoomMark } from '#client/components/marks.tsx'
import { announce } from '#client/lib/messages.ts'
import { keptVariant } from '../draft/kept-variant.ts'
import { usePlanner } from '../planner-context.tsx'
import { NotYet, StepHead } from '../steps/step-parts.tsx'
import { savedTime } from '../words/times.ts'
import { keptOwner } from './compare-href.ts'
import { ComparisonTable } from './comparison-table.tsx'
import type { Compared } from './use-compared.ts'

/** Two variants of a channel side by side: what was edited, which answers moved, and which edit alone moved them. */
export function CompareView({ compared }: { compared: Compared }) {
  const { state, dispatch, readOnly, where, stepHref, planning } = usePlanner()
  const { kept, found, stale, progress, failure } = compared
  const store = keptVariant(keptOwner(where))
  if (!kept)
    return (
      <>
        <StepHead title="Compare" say="What an edit does to the answers" />
        <NotYet>
          No variant is kept. Keep the draft as it stands, change what you like, and come back: the difference
          stands here with its causes.
        </NotYet>
        <p className="plan-choose">
          <Button kind="primary" onClick={() => store.keep(state.document)}>
            Keep this draft
          </Button>
          <ButtonLink to={stepHref('stages')}>Back to the steps</ButtonLink>
        </p>
      </>
    )
  const goBack = () => {
    dispatch({ type: 'replace', document: kept.document, label: 'Back to the kept variant' })
    announce('The kept variant is the draft again. Undo brings the edits back.')
  }
  return (
    <>
      <StepHead
        title="Compare"
        say={`The draft against the variant kept at ${savedTime(kept.at)}. Dotted in the level diagram: the kept one.`}
      />
      <p className="plan-choose">
        {readOnly === null && <Button onClick={goBack}>Go back to the kept variant</Button>}
        <Button onClick={() => store.keep(state.document)}>Keep the present draft instead</Button>
        <TextButton onClick={() => store.forget()}>Forget the kept variant</TextButton>
      </p>
      <div role="status" className="field-note">
        {failure === null && (!found || stale) && planning.planned && (
          <>{progress ? `Trying each edit alone: ${progress.done} of ${progress.of}.` : 'Being compared.'}</>
        )}
      </div>
      {failure !== null && <p className="plan-fault">The variants could not be compared: {failure}</p>}
      {!planning.planned && <NotYet>The draft cannot be planned yet: see the findings.</NotYet>}
      {found && found.comparison.causes.length === 0 && (
        <p className="verdict-head">
          <RoomMark state="clear" /> The draft is the kept variant: nothing was edited.
        </p>
      )}
      {found && found.comparison.causes.length > 0 && (
        <div className={stale ? 'd-stale' : undefined}>
          <ComparisonTable comparison={found.comparison} kept={kept.document} />
        </div>
      )}
    </>
  )
}
