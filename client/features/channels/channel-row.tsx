import type { ReactNode } from 'react'
import { Link } from 'react-router-dom'
import { MiniLevels } from '#client/components/drawings/mini-levels.tsx'
import { RevisionMark, revisionWords, RoomMark, roomTone, TickMark } from '#client/components/marks.tsx'
import { Menu, MenuItem, MenuRule } from '#client/components/menu.tsx'
import { Dash } from '#client/components/title-block.tsx'
import { paths } from '#client/lib/paths.ts'
import { usePreferences } from '#client/lib/preferences.ts'
import { whenOf } from '#client/lib/when.ts'
import type { Channel } from '#shared/api/channels.ts'
import { ErrorBar } from './error-bar.tsx'
import type { ChannelSummary } from './use-channel-plans.ts'
import { channelNumber, chosenOf, roomRule, sensorWords, spanWords } from './words.ts'

export const COLUMNS = 9

export interface RowActs {
  onCopy(channel: Channel): void
  onEdit(channel: Channel): void
  onDelete(channel: Channel): void
  onSelect(channel: Channel): void
}

interface ChannelRowProps {
  summary: ChannelSummary
  index: number
  workspaceId: string
  projectId: string
  selected: boolean
  mayCreate: boolean
  mayChange: boolean
  tabIndexFor(row: number, column: number): 0 | -1
  acts: RowActs
}

export function ChannelRow(props: ChannelRowProps) {
  const { summary, index, workspaceId, projectId, selected, mayCreate, mayChange, tabIndexFor, acts } = props
  const { decimalSign = '.' } = usePreferences()
  const { channel, plan, room, error, failure } = summary
  const levels = plan ? chosenOf(plan)?.levels : undefined
  const cell = (column: number, className: string, children: ReactNode, holdsControl = false) => (
    <td
      role="gridcell"
      data-cell={`${index}:${column}`}
      className={className}
      {...(holdsControl ? {} : { tabIndex: tabIndexFor(index, column) })}
    >
      {children}
    </td>
  )
  return (
    <tr role="row" aria-selected={selected} data-selected={selected || undefined}>
      {cell(
        0,
        'channel-number',
        <>
          {selected && <TickMark label="Selected" />} {channelNumber(channel)}
        </>,
      )}
      {cell(
        1,
        'channel-name',
        <>
          <Link to={paths.channelPlan(workspaceId, projectId, channel.id)} tabIndex={tabIndexFor(index, 1)}>
            {channel.name}
          </Link>
          <small>{sensorWords(channel.document)}</small>
        </>,
        true,
      )}
      {cell(2, 'channel-span', spanWords(channel.document, decimalSign))}
      {cell(
        3,
        'channel-levels',
        levels ? (
          <MiniLevels levels={levels} rule={roomRule(channel.document)} />
        ) : (
          <UnknownBays awaited={plan === undefined} />
        ),
      )}
      {cell(
        4,
        'channel-room',
        failure !== null ? (
          <span className="text-minium">Could not be worked out</span>
        ) : room === null ? (
          <Dash width="7em" />
        ) : (
          <span
            className={
              room.state === 'clear' || room.state === 'unknown' ? '' : `font-strong ${roomTone(room.state)}`
            }
          >
            <RoomMark state={room.state} className="mr-[7px]" />
            {room.text}
          </span>
        ),
      )}
      {cell(
        5,
        'channel-error',
        plan === undefined ? (
          <Dash width="6em" />
        ) : (
          <>
            <ErrorBar error={error.error} target={error.target} />
            {error.text}
          </>
        ),
      )}
      {cell(
        6,
        'channel-revision',
        <>
          <RevisionMark state="draft" className="mr-[7px]" />
          <b className="font-strong">A</b>
          <small>{revisionWords.draft}</small>
        </>,
      )}
      {cell(
        7,
        'channel-change',
        <>
          {channel.updatedBy?.name ?? 'nobody'}
          <small>{whenOf(channel.updatedAt)}</small>
        </>,
      )}
      {cell(
        8,
        'channel-more',
        <Menu
          look="text"
          align="end"
          label="More"
          ariaLabel={`More for CH ${channelNumber(channel)}`}
          tabIndex={tabIndexFor(index, 8)}
        >
          <MenuItem onSelect={() => acts.onSelect(channel)}>
            {selected ? 'Leave out of selection' : 'Select'}
          </MenuItem>
          <MenuItem onSelect={() => acts.onCopy(channel)} disabled={!mayCreate}>
            Copy
          </MenuItem>
          <MenuItem onSelect={() => acts.onEdit(channel)} disabled={!mayChange}>
            Name, number and location
          </MenuItem>
          <MenuRule />
          <MenuItem onSelect={() => acts.onDelete(channel)} disabled={!mayChange}>
            Delete
          </MenuItem>
        </Menu>,
        true,
      )}
    </tr>
  )
}

/** Bays of nodes that are not known yet: limits dashed. */
function UnknownBays({ awaited }: { awaited: boolean }) {
  return (
    <svg
      width="72"
      height="28"
      viewBox="-1 0 72 28"
      role="img"
      aria-label={awaited ? 'being worked out' : 'not known yet'}
    >
      {[0, 25, 50].map((x) => (
        <path
          key={x}
          d={`M${x} 4h18M${x} 26h18`}
          stroke="var(--ink-3)"
          strokeWidth={awaited ? 1 : 1.5}
          {...(awaited ? {} : { strokeDasharray: '3 2' })}
        />
      ))}
    </svg>
  )
}
