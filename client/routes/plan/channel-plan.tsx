import { useQuery, useQueryClient } from '@tanstack/react-query'
import { useCallback, useEffect, useMemo, useSyncExternalStore, type ReactNode } from 'react'
import { useParams } from 'react-router-dom'
import { NotFound } from '#client/components/not-found.tsx'
import { QueryFailure } from '#client/components/query-failure.tsx'
import { Awaited } from '#client/components/states.tsx'
import { TitleBlock } from '#client/components/title-block.tsx'
import { projectQuery } from '#client/features/projects/api.ts'
import { useMay } from '#client/features/session/api.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { paths } from '#client/lib/paths.ts'
import { channelQuery } from '#client/features/plan/api.ts'
import type { SaveState } from '#client/features/plan/draft/autosave.ts'
import { textAt } from '#client/features/plan/draft/paths.ts'
import { ConflictNotice } from '#client/features/plan/frame/conflict-notice.tsx'
import { draftCells } from '#client/features/plan/frame/title-cells.tsx'
import { Planner } from '#client/features/plan/planner.tsx'
import { channelSession, type ChannelSession } from '#client/features/plan/session/channel-session.ts'
import { isStep, type StepId } from '#client/features/plan/words/steps.ts'
import { clockTime, savedTime } from '#client/features/plan/words/times.ts'
import type { Channel } from '#shared/api/channels.ts'
import { whoMay } from '#shared/api/permissions.ts'

/** The plan of a stored channel: the same steps, saved as they are typed. */
export function ChannelPlanPage() {
  const { step } = useParams()
  const { workspaceId, projectId, channelId } = useRouteIds()
  const { data: channel, error, refetch } = useQuery(channelQuery(workspaceId, projectId, channelId))
  const compares = step === 'compare'
  if (!compares && !isStep(step)) return <NotFound />
  const retry = () => void refetch()
  if (error && !channel) return <QueryFailure error={error} what="The channel" onRetry={retry} />
  if (!channel)
    return (
      <>
        <TitleBlock
          cells={['Project', 'Channel', 'Required span', 'Target', 'Revision', 'Saved'].map((label) => ({
            id: label,
            label,
            value: null,
          }))}
        />
        <div className="mx-5 mt-4 max-sm:mx-3">
          <Awaited what="the channel" onRetry={retry} />
        </div>
      </>
    )
  return <ChannelPlan key={channel.id} channel={channel} step={isStep(step) ? step : null} />
}

/** `step` null: the draft held against its kept variant. */
function ChannelPlan({ channel, step }: { channel: Channel; step: StepId | null }) {
  const { workspaceId, projectId } = useRouteIds()
  const channelId = channel.id
  const client = useQueryClient()
  const may = useMay(workspaceId, 'channel.update')
  const { data: project } = useQuery(projectQuery(workspaceId, projectId))
  const session = useMemo(
    () =>
      channelSession(channel, { workspaceId, projectId, channelId }, (saved) => {
        client.setQueryData(channelQuery(workspaceId, projectId, channelId).queryKey, saved)
        void client.invalidateQueries({ queryKey: ['channels', workspaceId, projectId] })
      }),
    // The session follows the channel itself; each save brings a new object of the same channel.
    [client, channelId, workspaceId, projectId, channel],
  )
  const state = useSyncExternalStore(session.draft.subscribe, session.draft.getState)
  const saving = useSyncExternalStore(session.saving.subscribe, session.saving.get)
  useEffect(() => () => void session.autosave.flush(), [session])
  const stepHref = useCallback(
    (id: StepId) => paths.channelPlan(workspaceId, projectId, channelId, id),
    [workspaceId, projectId, channelId],
  )
  const where = useMemo(
    () => ({ kind: 'channel' as const, workspaceId, projectId, channelId }),
    [workspaceId, projectId, channelId],
  )
  const number = `CH ${String(channel.number).padStart(2, '0')}`
  return (
    <Planner
      session={session}
      where={where}
      step={step}
      compares={step === null}
      stepHref={stepHref}
      readOnly={may ? null : `Your role reads this channel; changing it takes ${whoMay('channel.update')}.`}
      cells={[
        { id: 'project', label: 'Project', value: project?.name ?? null },
        { id: 'channel', label: 'Channel', value: `${number} ${textAt(state.document, 'name')}` },
        ...draftCells(state.document),
        { id: 'saved', label: savingLabel(saving), value: savingWords(saving) },
      ]}
      notice={<SaveNotice session={session} saving={saving} />}
    />
  )
}

function SaveNotice({ session, saving }: { session: ChannelSession; saving: SaveState }): ReactNode {
  if (saving.kind === 'conflict')
    return (
      <ConflictNotice
        theirs={saving.theirs}
        mine={session.draft.getState().document}
        onKeepMine={() => session.autosave.keepMine()}
        onTakeTheirs={() => session.takeTheirs()}
      />
    )
  if (saving.kind === 'offline')
    return (
      <div className="plan-notice" role="alert">
        <p>
          <b>No connection since {clockTime(saving.since)}.</b> Typing goes on; every change is kept in this
          browser and sent when the server answers again.
        </p>
      </div>
    )
  if (saving.kind === 'refused')
    return (
      <div className="plan-notice" role="alert">
        <p>
          <b>Not saved:</b> {saving.message} What you typed is kept in this browser and goes out with the next
          change that the server takes.
        </p>
      </div>
    )
  return null
}

const savingLabel = (saving: SaveState): string => (saving.kind === 'saved' ? 'Saved' : 'Saving')

function savingWords(saving: SaveState): string {
  switch (saving.kind) {
    case 'saved':
      return savedTime(saving.at)
    case 'waiting':
    case 'saving':
      return 'being saved'
    case 'offline':
      return 'waits for the connection'
    case 'refused':
      return 'not saved'
    case 'conflict':
      return 'waits for your decision'
  }
}
