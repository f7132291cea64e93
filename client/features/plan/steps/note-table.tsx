import type { ReactNode } from 'react'
import { RoomMark, roomTone } from '#client/components/marks.tsx'
import { stateWords } from '#shared/note/span.ts'
import type { Table } from '#shared/note/types.ts'
import { TableRegion } from './step-parts.tsx'

interface NoteTableProps {
  caption: string
  table: Table
  id?: string
  /** Put before the text of a row's first cell: a bar. */
  lead?(row: number): ReactNode
}

/** A table of the design note, on the page: same cells, same rounding. */
export function NoteTable({ caption, table, id, lead }: NoteTableProps) {
  return (
    <TableRegion label={caption}>
      <table className="plan-table" {...(id ? { id } : {})}>
        <caption>{caption}</caption>
        <thead>
          <tr>
            {table.columns.map((column) => (
              <th key={column.title} scope="col" className={column.align === 'right' ? 'n' : undefined}>
                {column.title}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {table.rows.map((row, index) => (
            <tr key={index} data-total={row.total}>
              {row.cells.map((cell, at) => {
                const align = table.columns[at]?.align === 'right' ? 'n' : undefined
                const isState = row.state !== undefined && at === row.cells.length - 1
                if (at === 0)
                  return (
                    <th key={at} scope="row">
                      {cell}
                      {lead?.(index)}
                    </th>
                  )
                return (
                  <td key={at} className={isState && row.state ? roomTone(row.state) : align}>
                    {isState && row.state ? (
                      <>
                        <RoomMark state={row.state} /> {stateWords[row.state]}
                      </>
                    ) : (
                      cell
                    )}
                  </td>
                )
              })}
            </tr>
          ))}
        </tbody>
      </table>
    </TableRegion>
  )
}
