import type { Candidate } from '#shared/design/plan.ts'
import { toScale } from '#shared/note/quality-sections.ts'
import { Link } from 'react-router-dom'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import type { Planned } from '../session/plan-session.ts'
import { fieldId } from '../words/steps.ts'
import { Analyses, EndPoints } from './errors/analyses.tsx'
import { BudgetPanel } from './errors/budget-panel.tsx'
import { Improvements } from './errors/improvements.tsx'
import { NoisePanel } from './errors/noise-panel.tsx'
import { SpreadPanel } from './errors/spread-panel.tsx'
import { NotYet, StepHead } from './step-parts.tsx'
import { TargetFields } from './target-fields.tsx'
import { TransferDrawing } from './transfer-drawing.tsx'

/** Step 7: how far off the chain is, and why. */
export function ErrorsStep() {
  const { candidate, planning, stepHref } = usePlanner()
  const { planned } = planning
  return (
    <>
      <StepHead
        title="Errors"
        say="Whether the target is met, what dominates, what would improve it, and how many boards meet it"
      />
      {planned && candidate?.realised ? (
        <Quality candidate={candidate} planned={planned} />
      ) : (
        <NotYet>Errors are computed once an arrangement fits.</NotYet>
      )}
      <ErrorFields />
      {planned && candidate?.realised && (
        <>
          <h2>End points and pins</h2>
          <EndPoints candidate={candidate} design={planned.design} plan={planned.plan} />
          <TransferDrawing />
          <Analyses candidate={candidate} design={planned.design} />
          <p className="field-note">
            An independent simulator can be asked for the same figures:{' '}
            <Link to={stepHref('review')}>independent check, step 8</Link>.
          </p>
        </>
      )}
    </>
  )
}

function Quality({ candidate, planned }: { candidate: Candidate; planned: Planned }) {
  const { design, plan } = planned
  const scale = toScale({ design, plan, candidate })
  const { budget, noise } = candidate
  return (
    <>
      {budget && scale ? (
        <>
          <BudgetPanel budget={budget} scale={scale} candidate={candidate} design={design} />
          <Improvements budget={budget} scale={scale} design={design} />
        </>
      ) : (
        <NotYet>This plan has no error budget.</NotYet>
      )}
      {noise ? <NoisePanel noise={noise} /> : <NotYet>This plan has no noise figures.</NotYet>}
      {budget && scale && <SpreadPanel budget={budget} scale={scale} candidate={candidate} />}
    </>
  )
}

/** What the errors are judged by: target, adjustment, distribution. */
function ErrorFields() {
  const { quantity } = usePlanner()
  return (
    <>
      <TargetFields />
      <fieldset className="plan-group" id={fieldId('calibration')}>
        <legend>Adjustment</legend>
        <p className="field-note">
          Where zero and span are adjusted, with what standard, and after how long it is done again.
          Temperature: step 1.
        </p>
        <div className="plan-fields">
          <SchemaField
            path="calibration.points"
            unit={quantity.unit}
            help="Empty: the ends of the required span. Otherwise one or two values of the measurand."
          />
          <SchemaField path="calibration.standardUncertainty" />
          <SchemaField path="calibration.interval" />
        </div>
      </fieldset>
      <fieldset className="plan-group" id={fieldId('analysis')}>
        <legend>Limits</legend>
        <p className="field-note">
          How a limit without a distribution of its own is taken, and how much of the error the ideal model
          may make.
        </p>
        <div className="plan-fields">
          <SchemaField path="analysis.distribution" />
          <SchemaField path="rules.modelError" />
        </div>
      </fieldset>
    </>
  )
}
