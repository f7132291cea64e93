import { useEffect, useRef, useState } from 'react'
import { Button } from '#client/components/buttons.tsx'
import { RoomMark, roomTone } from '#client/components/marks.tsx'
import { runCheck, type CheckProgress } from '#client/lib/check-client.ts'
import { withPower } from '#client/lib/powers.ts'
import type { IndependentCheck } from '#shared/design/plan.ts'
import type { Table } from '#shared/note/types.ts'
import { toCheckTable } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { usePlanner } from '../planner-context.tsx'
import { NoteTable } from '../steps/note-table.tsx'

interface Run {
  document: unknown
  progress: CheckProgress | null
  check: IndependentCheck | null
  failure: string | null
}

/** The same network in a circuit simulator, asked for by hand: our figure, its figure, the difference. */
export function CheckPanel() {
  const { planning, chosen, candidate } = usePlanner()
  const [run, setRun] = useState<Run | null>(null)
  const stopper = useRef<AbortController | null>(null)
  useEffect(() => () => stopper.current?.abort(), [])
  const { planned } = planning
  const inactive =
    !planned || planning.status !== 'current'
      ? 'Fields have to be put right first: see the findings.'
      : candidate?.netlist
        ? undefined
        : 'Nothing to check before an arrangement fits.'
  const running = run !== null && run.check === null && run.failure === null

  const start = () => {
    if (!planned || chosen === null) return
    const stop = new AbortController()
    stopper.current?.abort()
    stopper.current = stop
    const update = (change: Partial<Run>) =>
      setRun((held) => (held && stopper.current === stop ? { ...held, ...change } : held))
    setRun({ document: planned.document, progress: null, check: null, failure: null })
    runCheck(planned.document, chosen, {
      signal: stop.signal,
      onProgress: (progress) => update({ progress }),
    }).then(
      (check) => update({ check }),
      (error: unknown) => {
        if (stop.signal.aborted) return
        update({ failure: error instanceof Error ? error.message : String(error) })
      },
    )
  }
  const halt = () => {
    stopper.current?.abort()
    setRun(null)
  }

  return (
    <section aria-label="Independent check" className="check-panel">
      <h2>Independent check</h2>
      <p className="field-note">
        The netlist of this plan is run in a circuit simulator in your browser: operating point at both ends,
        gain over frequency, noise. It shares the connections and the part data with the plan, not the
        arithmetic: a slip in our equations shows, a wrong figure in a data field or a wrong sensor does not.
        Loading it takes a few megabytes, once.
      </p>
      <div className="plan-choose">
        {running ? (
          <Button onClick={halt}>Stop</Button>
        ) : (
          <Button onClick={start} inactive={inactive}>
            {run?.check ? 'Check again' : 'Check in the simulator'}
          </Button>
        )}
        <p role="status">{running ? progressWords(run.progress) : ''}</p>
      </div>
      {run?.failure && <p className="plan-fault">The check could not be made: {run.failure}</p>}
      {run?.check && (
        <div className={run.document === planned?.document ? undefined : 'd-stale'}>
          <p className={roomTone(run.check.ok ? 'clear' : 'over')}>
            <RoomMark state={run.check.ok ? 'clear' : 'over'} /> <b>{verdictWords(run.check)}</b>
            {run.document !== planned?.document && ' These are figures of the design before the last change.'}
          </p>
          <NoteTable caption="Plan against simulator" table={withPowers(toCheckTable(run.check))} />
        </div>
      )}
    </section>
  )
}

/** Differences run over many decades. */
const withPowers = (table: Table): Table => ({
  ...table,
  rows: table.rows.map((row) => ({ ...row, cells: row.cells.map(withPower) })),
})

function progressWords(progress: CheckProgress | null): string {
  if (!progress) return 'Being started.'
  if (progress.stage === 'running') return `Run ${progress.done} of ${progress.of}.`
  const megabytes = (bytes: number) => formatQuantity(bytes / 1e6, '', { digits: 2 })
  return progress.of === null
    ? `Loading the simulator: ${megabytes(progress.done)} MB.`
    : `Loading the simulator: ${megabytes(progress.done)} of ${megabytes(progress.of)} MB.`
}

function verdictWords({ lines, ok }: IndependentCheck): string {
  if (ok) return `All ${lines.length} figures agree within what is allowed.`
  const off = lines.filter((line) => !line.ok).length
  return `${off} of ${lines.length} figures differ by more than is allowed: a defect of this plan, please report it.`
}
