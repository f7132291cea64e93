import { ButtonLink, TextButton } from '#client/components/buttons.tsx'
import { KeyHint } from '#client/components/kbd.tsx'
import { usePlanner } from '../planner-context.tsx'
import { KeepControls } from './keep-controls.tsx'
import { neighbours, stepTitle } from '../words/steps.ts'

/** Back and next, named after where they lead; undo and redo; the keys of the plan. */
export function ActionBar() {
  const { step, stepHref, state, dispatch, readOnly } = usePlanner()
  const { previous, next } = step ? neighbours(step) : { previous: null, next: 'measurand' as const }
  const last = state.past.at(-1)
  const coming = state.future.at(-1)
  return (
    <div className="plan-actions no-print">
      {previous && (
        <ButtonLink to={stepHref(previous)} rel="prev">
          <Arrow back /> {stepTitle(previous)}
        </ButtonLink>
      )}
      {readOnly === null && (
        <span className="plan-undo">
          <TextButton disabled={!last} onClick={() => dispatch({ type: 'undo' })}>
            Undo{last ? `: ${last.label}` : ''}
          </TextButton>
          {coming && (
            <TextButton onClick={() => dispatch({ type: 'redo' })}>Redo{`: ${coming.label}`}</TextButton>
          )}
        </span>
      )}
      <KeepControls />
      <span className="plan-keys">
        <KeyHint of="F8">next finding</KeyHint>
        <KeyHint of="Ctrl Z">undo</KeyHint>
        <KeyHint of="Ctrl Enter">next step</KeyHint>
        <KeyHint of="?">all keys</KeyHint>
      </span>
      {next && (
        <ButtonLink to={stepHref(next)} kind="primary" rel="next" className="plan-next">
          {step ? stepTitle(next) : 'All steps'} <Arrow />
        </ButtonLink>
      )}
    </div>
  )
}

function Arrow({ back = false }: { back?: boolean }) {
  return (
    <svg width="14" height="10" viewBox="0 0 14 10" aria-hidden="true">
      <path
        d={back ? 'M13 5H1M5 1L1 5l4 4' : 'M1 5h12M9 1l4 4-4 4'}
        fill="none"
        stroke="currentColor"
        strokeWidth="1.5"
      />
    </svg>
  )
}
