import type { ReactNode } from 'react'
import { Link } from 'react-router-dom'
import type { RoomState } from '#shared/design/plan.ts'
import { roomTone } from '#client/components/marks.tsx'
import { paths } from '#client/lib/paths.ts'
import type { ChannelSummary } from './use-channel-plans.ts'
import { channelNumber } from './words.ts'

interface BoardSentenceProps {
  rows: readonly ChannelSummary[]
  workspaceId: string
  projectId: string
}

const NAMED = 4

/** What stands between the board and its release, as one sentence with links. */
export function BoardSentence({ rows, workspaceId, projectId }: BoardSentenceProps) {
  if (rows.length === 0) return null
  const awaited = rows.filter((row) => row.room === null && row.failure === null).length
  if (awaited > 0) return <>Working out {awaited === 1 ? 'one channel' : `${awaited} channels`}.</>
  const links = (state: RoomState, act: (n: number) => ReactNode): ReactNode | null => {
    const members = rows.filter((row) => row.room?.state === state)
    if (members.length === 0) return null
    return (
      <>
        {members.slice(0, NAMED).map((row, index) => (
          <span key={row.channel.id}>
            {index > 0 &&
              (index === Math.min(members.length, NAMED) - 1 && members.length <= NAMED ? ' and ' : ', ')}
            <Link
              className="font-value text-ink"
              to={paths.channelPlan(
                workspaceId,
                projectId,
                row.channel.id,
                state === 'unknown' ? 'measurand' : 'stages',
              )}
            >
              CH {channelNumber(row.channel)}
            </Link>
          </span>
        ))}
        {members.length > NAMED && <> and {members.length - NAMED} more</>} {act(members.length)}
      </>
    )
  }
  const tone = (state: RoomState, text: string) => <b className={`font-strong ${roomTone(state)}`}>{text}</b>
  const parts = [
    links('over', (n) => (
      <>{tone('over', n === 1 ? 'passes a limit' : 'pass a limit')} before the end of the required span</>
    )),
    links('unknown', (n) => (n === 1 ? 'has open questions' : 'have open questions')),
    links('tight', (n) => (
      <>
        {n === 1 ? 'is' : 'are'} {tone('tight', 'tight')}
      </>
    )),
  ].filter((part) => part !== null)
  if (parts.length === 0) return <>All channels keep their room for every board. All are drafts.</>
  return (
    <>
      Before this board can be released:{' '}
      {parts.map((part, index) => (
        <span key={index}>
          {index > 0 && (index === parts.length - 1 ? ', and ' : ', ')}
          {part}
        </span>
      ))}
      .
    </>
  )
}
