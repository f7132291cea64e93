import { RoomMark } from '#client/components/marks.tsx'
import type { RoomState } from '#shared/design/plan.ts'
import { usePlanner } from '../planner-context.tsx'
import { pressing, type ShownFinding } from '../words/findings.ts'
import { stepNumber, stepTitle } from '../words/steps.ts'
import { PlanAnswers } from './answers.tsx'
import { SpanRuler } from './span-ruler.tsx'

const marks: Record<ShownFinding['severity'], RoomState> = {
  over: 'over',
  open: 'unknown',
  tight: 'tight',
  caution: 'tight',
  info: 'unknown',
}

const spoken: Record<ShownFinding['severity'], string> = {
  over: 'To put right',
  open: 'Open',
  tight: 'Tight',
  caution: 'Caution',
  info: 'To know',
}

/** What is wrong, worst first; what the chain does; what it answers. */
export function FindingsColumn() {
  const { findings, planning } = usePlanner()
  return (
    <aside className="plan-rail" aria-label="Findings and answers">
      <section>
        <h2>Findings</h2>
        {findings.length === 0 ? (
          <p className="plan-none">
            <RoomMark state={planning.planned ? 'clear' : 'unknown'} />{' '}
            {planning.planned ? 'Nothing is wrong.' : 'Nothing is known yet.'}
          </p>
        ) : (
          <FindingList findings={findings} />
        )}
      </section>
      <section>
        <h3>Answers for this draft</h3>
        <SpanRuler />
        <PlanAnswers />
      </section>
    </aside>
  )
}

/** Findings as they are listed beside the work and in the review. */
export function FindingList({ findings }: { findings: readonly ShownFinding[] }) {
  return (
    <ol className="findings">
      {findings.map((finding) => (
        <FindingItem key={finding.key} finding={finding} />
      ))}
    </ol>
  )
}

function FindingItem({ finding }: { finding: ShownFinding }) {
  const { goTo, step } = usePlanner()
  const { path } = finding
  const where =
    finding.step === step
      ? 'Go to the field'
      : `Go to step ${stepNumber(finding.step)}, ${stepTitle(finding.step)}`
  return (
    <li data-severity={finding.severity}>
      <RoomMark state={marks[finding.severity]} label={spoken[finding.severity]} />
      <div>
        {finding.title && <b>{finding.title}</b>}
        {finding.text && <p>{finding.text}</p>}
        {path !== null && (
          <button type="button" className="text-button" onClick={() => goTo(path)}>
            {where}
          </button>
        )}
      </div>
    </li>
  )
}

/** How many findings ask for work, else how many are for information, in one line. */
export function findingsInShort(findings: readonly ShownFinding[]): string {
  const count = pressing(findings).length
  if (count > 0) return count === 1 ? '1 finding' : `${count} findings`
  return findings.length === 0 ? 'No findings' : `${findings.length} to note`
}
