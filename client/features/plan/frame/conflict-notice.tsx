import { useState } from 'react'
import { Button } from '#client/components/buttons.tsx'
import { clockTime } from '../words/times.ts'
import type { Theirs } from '../draft/autosave.ts'
import { compareDrafts } from '#shared/design/document-differences.ts'
import type { DraftDocument } from '../draft/paths.ts'
import { fieldAt } from '../form/introspect.ts'
import { textAt } from '../draft/paths.ts'

interface ConflictNoticeProps {
  theirs: Theirs
  mine: DraftDocument
  onKeepMine(): void
  onTakeTheirs(): void
}

/** Somebody else saved this draft first: who, when, what differs. Nothing is overwritten until one is chosen. */
export function ConflictNotice({ theirs, mine, onKeepMine, onTakeTheirs }: ConflictNoticeProps) {
  const [open, setOpen] = useState(false)
  const differences = compareDrafts(mine, theirs.document)
  const kind = textAt(mine, 'sensor.kind') || 'voltage'
  return (
    <div className="plan-notice" role="alert">
      <p>
        <b>
          {theirs.by} changed this channel at {clockTime(theirs.at)}.
        </b>{' '}
        Your changes since then are here but not saved. Nothing is overwritten until you decide.
      </p>
      <div className="plan-notice-acts">
        <Button aria-expanded={open} onClick={() => setOpen(!open)}>
          Compare ({differences.length})
        </Button>
        <Button onClick={onKeepMine}>Use my figures</Button>
        <Button onClick={onTakeTheirs}>Use the saved figures</Button>
      </div>
      {open && (
        <table className="plan-table">
          <caption>What differs</caption>
          <thead>
            <tr>
              <th scope="col">Field</th>
              <th scope="col">Mine</th>
              <th scope="col">{theirs.by}</th>
            </tr>
          </thead>
          <tbody>
            {differences.map((difference) => (
              <tr key={difference.path}>
                <th scope="row">{label(difference.path, kind)}</th>
                <td>{text(difference.mine)}</td>
                <td>{text(difference.theirs)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
    </div>
  )
}

function label(path: string, kind: string): string {
  try {
    return fieldAt(path, kind).label
  } catch {
    return path
  }
}

const text = (value: unknown): string =>
  value === undefined ? 'not stated' : typeof value === 'string' ? value : JSON.stringify(value)
