import { Fragment, type KeyboardEvent } from 'react'
import { useNavigate } from 'react-router-dom'
import { Dash } from '#client/components/title-block.tsx'
import { paths } from '#client/lib/paths.ts'
import { usePreferences } from '#client/lib/preferences.ts'
import type { ChannelGroup } from './arrange.ts'
import { ChannelRow, COLUMNS, type RowActs } from './channel-row.tsx'
import { useGridFocus } from './use-grid-focus.ts'
import './channels.css'

interface ChannelGridProps {
  /** undefined while the list is awaited. */
  groups: readonly ChannelGroup[] | undefined
  workspaceId: string
  projectId: string
  selection: ReadonlySet<string>
  mayCreate: boolean
  mayChange: boolean
  acts: RowActs
}

const heads = [
  'CH',
  'Measurand and sensor',
  'Required span',
  'Levels along chain',
  'Least room, worst board',
  'End error, worst board',
  'Revision',
  'Last change',
]

/** The list of channels, one tab stop: arrows move between cells, Enter opens, Space selects. */
export function ChannelGrid(props: ChannelGridProps) {
  const { groups, workspaceId, projectId, selection, acts } = props
  const { letterKeys } = usePreferences()
  const navigate = useNavigate()
  const rows = (groups ?? []).flatMap((group) => group.rows)
  const focus = useGridFocus(rows.length, COLUMNS)

  const handleKey = (event: KeyboardEvent<HTMLTableElement>) => {
    // Keys pressed in an open menu arrive here too, since the menu belongs to a cell.
    if (!(event.target instanceof Element) || !event.currentTarget.contains(event.target)) return
    if (focus.move(event) || event.ctrlKey || event.metaKey || event.altKey) return
    const channel = rows[focus.row]?.channel
    const onButton = event.target.closest('button') !== null
    if (event.key === ' ' && channel && !onButton) {
      event.preventDefault()
      acts.onSelect(channel)
    } else if (event.key === 'Enter' && channel && event.target.closest('a, button') === null) {
      void navigate(paths.channelPlan(workspaceId, projectId, channel.id))
    } else if (letterKeys && event.key.toLowerCase() === 'p' && !event.shiftKey) {
      event.preventDefault()
      window.print()
    }
  }

  let index = -1
  return (
    <div className="channel-scroll" role="region" aria-label="Channels" tabIndex={-1}>
      <table
        ref={focus.table}
        role="grid"
        aria-label="Channels"
        aria-multiselectable="true"
        className="channel-grid"
        onKeyDownCapture={handleKey}
        onFocus={focus.onFocus}
      >
        <thead role="rowgroup">
          <tr role="row">
            {heads.map((head) => (
              <th key={head} role="columnheader" scope="col">
                {head}
              </th>
            ))}
            <th role="columnheader" scope="col">
              <span className="sr-only">Acts</span>
            </th>
          </tr>
        </thead>
        {groups === undefined ? (
          <AwaitedRows />
        ) : (
          groups.map((group) => (
            <tbody key={group.name ?? ''} role="rowgroup">
              {group.name !== null && (
                <tr role="row" className="channel-group">
                  <th role="rowheader" scope="rowgroup" colSpan={COLUMNS}>
                    {group.name} <span>{group.rows.length}</span>
                  </th>
                </tr>
              )}
              {group.rows.map((summary) => {
                index += 1
                return (
                  <Fragment key={summary.channel.id}>
                    <ChannelRow
                      {...props}
                      summary={summary}
                      index={index}
                      selected={selection.has(summary.channel.id)}
                      tabIndexFor={focus.tabIndexFor}
                    />
                  </Fragment>
                )
              })}
            </tbody>
          ))
        )}
      </table>
    </div>
  )
}

const widths = [1.5, 11, 6, 6, 8, 7, 4, 7, 3]

function AwaitedRows() {
  return (
    <tbody role="rowgroup" aria-hidden="true">
      {[0, 1, 2, 3, 4].map((row) => (
        <tr key={row} role="row">
          {widths.map((width, column) => (
            <td key={column} role="gridcell">
              <Dash width={`${width}em`} />
            </td>
          ))}
        </tr>
      ))}
    </tbody>
  )
}
