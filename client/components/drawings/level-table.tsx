import { RoomMark } from '#client/components/marks.tsx'
import type { LevelCell, LevelTable } from '#shared/drawings/level-figures.ts'
import { useChanged } from './use-changed.ts'

/** The table under the strip, its columns in line with the bays. */
export function LevelFigures({
  id,
  table,
  caption,
  gutter,
  column,
}: {
  id: string
  table: LevelTable
  caption: string
  gutter: number
  column: number
}) {
  return (
    <table
      id={id}
      className="d-table d-levels-table"
      style={{ width: gutter + column * table.nodes.length }}
      tabIndex={-1}
    >
      <caption>{caption}</caption>
      <colgroup>
        <col style={{ width: gutter }} />
        {table.nodes.map(({ node }) => (
          <col key={node} style={{ width: column }} />
        ))}
      </colgroup>
      <thead>
        <tr>
          <td />
          {table.nodes.map(({ node, title }) => (
            <th key={node} scope="col">
              {title}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {table.rows.map((row) => (
          <tr key={row.name}>
            <th scope="row">{row.name}</th>
            {row.cells.map((cell, i) => (
              <td key={table.nodes[i]?.node ?? i} className={cellClass(cell)}>
                <CellText cell={cell} />
              </td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  )
}

export const cellClass = (cell: LevelCell): string => (cell.state ? `d-is-${cell.state}` : '')

/** A figure with its mark, and the nominal one in smaller type. */
export function CellText({ cell }: { cell: LevelCell }) {
  const changed = useChanged(cell.text)
  return (
    <>
      {cell.state ? <RoomMark state={cell.state} className="mr-1 size-3" /> : null}
      <span className={changed ? 'd-changed' : undefined}>{cell.text}</span>
      {cell.small === undefined ? null : <small className="d-small">{cell.small}</small>}
    </>
  )
}
