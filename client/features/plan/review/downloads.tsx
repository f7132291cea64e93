import { useEffect, useRef, useState } from 'react'
import { Button } from '#client/components/buttons.tsx'
import { SelectField, type SelectOption } from '#client/components/select-field.tsx'
import { callForFile, messageOf } from '#client/lib/api-client.ts'
import { announce } from '#client/lib/messages.ts'
import { noteApi, papers, type Paper } from '#shared/api/note.ts'
import { usePlanner } from '../planner-context.tsx'
import { toPartsCsv } from './parts-csv.ts'

/** Everything that a plan can be taken away as. Files are made from the very document that the page shows. */
export function Downloads() {
  const { planning, candidate } = usePlanner()
  const { planned } = planning
  const ready = planned !== null && planning.status === 'current'
  const why = ready ? undefined : 'Fields have to be put right first: see the findings.'
  const chain = candidate?.netlist ? undefined : 'Nothing to give out before an arrangement fits.'
  const name = fileName(planned?.document.name ?? 'plan')
  return (
    <section aria-label="Downloads">
      <h2>Take it with you</h2>
      <NoteDownload ready={ready} name={name} />
      <div className="plan-downloads">
        <Button
          inactive={why ?? chain}
          onClick={() => saveText(candidate?.netlist ?? '', `${name}.cir`, 'text/plain')}
        >
          SPICE netlist
        </Button>
        <Button
          inactive={why ?? chain}
          onClick={() => saveText(toPartsCsv(candidate?.components ?? []), `${name}, parts.csv`, 'text/csv')}
        >
          Parts, CSV
        </Button>
        <Button
          inactive={why}
          onClick={() =>
            saveText(
              `${JSON.stringify(planned?.document, null, 2)}\n`,
              `${name}.design.json`,
              'application/json',
            )
          }
        >
          Design, JSON
        </Button>
        <Button
          inactive={why}
          onClick={() =>
            saveText(`${JSON.stringify(planned?.plan, null, 2)}\n`, `${name}.plan.json`, 'application/json')
          }
        >
          Plan, JSON
        </Button>
      </div>
    </section>
  )
}

const paperOptions: SelectOption<Paper>[] = papers.map((value) => ({ value, label: value }))

type Progress = { kind: 'idle' } | { kind: 'making' } | { kind: 'failed'; message: string }

function NoteDownload({ ready, name }: { ready: boolean; name: string }) {
  const { planning, where } = usePlanner()
  const [paper, setPaper] = useState<Paper>('A4')
  const [progress, setProgress] = useState<Progress>({ kind: 'idle' })
  const running = useRef<AbortController | null>(null)
  useEffect(() => () => running.current?.abort(), [])

  const make = async () => {
    const document = planning.planned?.document
    if (!document) return
    const stop = new AbortController()
    running.current = stop
    setProgress({ kind: 'making' })
    announce('The design note is being made.')
    try {
      const { signal } = stop
      const query = { paper }
      const file =
        where.kind === 'visitor'
          ? await callForFile(noteApi.create, { body: { ...document }, query, signal })
          : await callForFile(noteApi.get, {
              params: { workspaceId: where.workspaceId, channelId: where.channelId },
              query,
              signal,
            })
      saveBlob(file, `${name}, design note.pdf`)
      setProgress({ kind: 'idle' })
      announce('The design note is downloaded.')
    } catch (error) {
      if (stop.signal.aborted) setProgress({ kind: 'idle' })
      else setProgress({ kind: 'failed', message: messageOf(error) })
    }
  }

  return (
    <div className="plan-note">
      <SelectField label="Paper" layout="inline" value={paper} options={paperOptions} onChange={setPaper} />
      {progress.kind === 'making' ? (
        <>
          <span>The note is being made …</span>
          <Button onClick={() => running.current?.abort()}>Stop</Button>
        </>
      ) : (
        <Button
          kind="primary"
          inactive={ready ? undefined : 'Fields have to be put right first: see the findings.'}
          onClick={() => void make()}
        >
          Design note, PDF
        </Button>
      )}
      {progress.kind === 'failed' && (
        <p role="alert" className="plan-fault">
          The note could not be made: {progress.message} Your plan is safe; try again.
        </p>
      )}
    </div>
  )
}

function saveText(text: string, name: string, type: string): void {
  saveBlob(new Blob([text], { type: `${type};charset=utf-8` }), name)
}

function saveBlob(blob: Blob, name: string): void {
  const address = URL.createObjectURL(blob)
  const link = document.createElement('a')
  link.href = address
  link.download = name
  link.click()
  // The browser has to have begun reading it before the address goes.
  setTimeout(() => URL.revokeObjectURL(address), 60_000)
}

/** Characters that some file system refuses become hyphens. */
export const fileName = (name: string): string =>
  [...name]
    .map((character) => (character < ' ' || '<>:"/\\|?*'.includes(character) ? '-' : character))
    .join('')
    .replace(/[. ]+$/, '')
    .slice(0, 80) || 'plan'
