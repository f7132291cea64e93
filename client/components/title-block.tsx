import type { ReactNode } from 'react'

export interface TitleCell {
  label: ReactNode
  /** null while it is awaited: the cell then shows a dash. */
  value: ReactNode
  id?: string
}

/** The ruled block at the head of a sheet: what this is, of what, in which state. */
export function TitleBlock({ cells }: { cells: TitleCell[] }) {
  return (
    <dl className="title-block mx-5 max-sm:mx-3">
      {cells.map((cell, index) => (
        <div key={cell.id ?? index}>
          <dt>{cell.label}</dt>
          <dd>{cell.value ?? <Dash />}</dd>
        </div>
      ))}
    </dl>
  )
}

/** Stands for a value that is not there yet. */
export function Dash({ width = '4em' }: { width?: string }) {
  return (
    <>
      <span className="dash" style={{ width }} aria-hidden="true" />
      <span className="sr-only">not there yet</span>
    </>
  )
}
