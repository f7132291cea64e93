import { useQuery } from '@tanstack/react-query'
import { useRef, useState } from 'react'
import { whoMay } from '#shared/api/permissions.ts'
import type { Channel } from '#shared/api/channels.ts'
import { Button, ButtonLink, TextButton } from '#client/components/buttons.tsx'
import { KeyHint } from '#client/components/kbd.tsx'
import { RevisionMark, RoomMark } from '#client/components/marks.tsx'
import { Menu, MenuChoice } from '#client/components/menu.tsx'
import { PageHead } from '#client/components/page.tsx'
import { QueryFailure } from '#client/components/query-failure.tsx'
import { Awaited, Empty } from '#client/components/states.tsx'
import { channelsQuery } from '#client/features/channels/api.ts'
import { arrangeChannels, orders, type Order } from '#client/features/channels/arrange.ts'
import { BoardSentence } from '#client/features/channels/board-sentence.tsx'
import { ChannelDetails } from '#client/features/channels/channel-details.tsx'
import { ChannelGrid } from '#client/features/channels/channel-grid.tsx'
import { useChannelPlans } from '#client/features/channels/use-channel-plans.ts'
import { useRowActs } from '#client/features/channels/use-row-acts.ts'
import { projectQuery } from '#client/features/projects/api.ts'
import { useMay } from '#client/features/session/api.ts'
import { useLetterKey } from '#client/hooks/use-letter-key.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { paths } from '#client/lib/paths.ts'

export function ChannelsPage() {
  const { workspaceId, projectId } = useRouteIds()
  const { data: project } = useQuery(projectQuery(workspaceId, projectId))
  const { data: channels, error, refetch } = useQuery(channelsQuery(workspaceId, projectId))
  const rows = useChannelPlans(channels)
  const [find, setFind] = useState('')
  const [order, setOrder] = useState<Order>('number')
  const [edited, setEdited] = useState<Channel | null>(null)
  const acts = useRowActs(workspaceId, projectId)
  const mayCreate = useMay(workspaceId, 'channel.create')
  const mayChange = useMay(workspaceId, 'channel.update')
  usePageTitle('Channels', project?.name)
  const retry = () => void refetch()

  if (error && !channels) return <QueryFailure error={error} what="The list of channels" onRetry={retry} />

  const groups = channels && arrangeChannels(rows, find, order)
  const found = groups?.reduce((n, group) => n + group.rows.length, 0) ?? 0
  const selected = (channels ?? []).filter((channel) => acts.selection.has(channel.id))
  const add = mayCreate ? (
    <ButtonLink to={paths.newChannel(workspaceId, projectId)} kind="primary">
      Add a channel
    </ButtonLink>
  ) : (
    <Button kind="primary" inactive={`Adding a channel takes ${whoMay('channel.create')}.`}>
      Add a channel
    </Button>
  )

  return (
    <>
      <PageHead
        title="Channels"
        say={<BoardSentence rows={rows} workspaceId={workspaceId} projectId={projectId} />}
        tools={
          <>
            <FindField value={find} onChange={setFind} />
            <Menu
              label={`Order: ${orders.find((o) => o.value === order)?.label.toLowerCase() ?? ''}`}
              align="end"
            >
              <MenuChoice<Order>
                label="Order of the list"
                value={order}
                options={orders}
                onChange={setOrder}
              />
            </Menu>
            {add}
          </>
        }
      />
      {selected.length > 0 && (
        <div className="mx-5 mb-2 flex flex-wrap items-center gap-x-5 border-l-4 border-ink pl-3 text-13 max-sm:mx-3">
          <span>{selected.length === 1 ? '1 channel selected' : `${selected.length} channels selected`}</span>
          {mayCreate && (
            <TextButton disabled={acts.isBusy} onClick={() => void acts.handleCopy(selected)}>
              Copy
            </TextButton>
          )}
          {mayChange && (
            <TextButton disabled={acts.isBusy} onClick={() => void acts.handleDelete(selected)}>
              Delete
            </TextButton>
          )}
          <TextButton onClick={acts.clear}>Clear the selection</TextButton>
        </div>
      )}
      <div className="sheet mx-5 max-sm:mx-3">
        {channels?.length === 0 ? (
          <Empty actions={add}>
            No channel yet. A channel is one sensor with its way to a converter; the first one takes about two
            minutes.
          </Empty>
        ) : (
          <>
            <ChannelGrid
              groups={groups}
              workspaceId={workspaceId}
              projectId={projectId}
              selection={acts.selection}
              mayCreate={mayCreate}
              mayChange={mayChange}
              acts={{
                onCopy: (channel) => void acts.handleCopy([channel]),
                onDelete: (channel) => void acts.handleDelete([channel]),
                onSelect: acts.handleSelect,
                onEdit: setEdited,
              }}
            />
            {channels && found === 0 && (
              <Empty actions={<Button onClick={() => setFind('')}>Show all channels</Button>}>
                No channel matches “{find}”.
              </Empty>
            )}
          </>
        )}
      </div>
      {!channels && (
        <div className="mx-5 mt-2 max-sm:mx-3">
          <Awaited what="the list of channels" onRetry={retry} />
        </div>
      )}
      <Legend />
      {edited && (
        <ChannelDetails
          channel={edited}
          workspaceId={workspaceId}
          projectId={projectId}
          locations={[...new Set((channels ?? []).map((channel) => channel.group).filter(Boolean))]}
          onClose={() => setEdited(null)}
        />
      )}
    </>
  )
}

function FindField({ value, onChange }: { value: string; onChange(value: string): void }) {
  const input = useRef<HTMLInputElement>(null)
  useLetterKey('/', () => input.current?.select())
  return (
    <label className="flex items-center gap-2 text-13 text-ink-2">
      <span className="cut-label">Find a channel</span>
      <span className="field-box w-44">
        <input
          ref={input}
          type="search"
          value={value}
          aria-keyshortcuts="/"
          onChange={(event) => onChange(event.target.value)}
          onKeyDown={(event) => {
            if (event.key === 'Escape') onChange('')
          }}
        />
        {value === '' && (
          <kbd className="key" aria-hidden="true">
            /
          </kbd>
        )}
      </span>
    </label>
  )
}

/** Keys at the left, marks at the right. */
function Legend() {
  return (
    <div className="no-print mx-5 flex min-h-[46px] flex-wrap items-center gap-x-4 gap-y-1 py-2 text-12 text-ink-2 max-sm:mx-3">
      <span className="flex flex-wrap gap-x-4 gap-y-1 pointer-coarse:hidden">
        <KeyHint of="Up Down">row</KeyHint>
        <KeyHint of="Enter">open</KeyHint>
        <KeyHint of="Space">select</KeyHint>
        <KeyHint of="P">print</KeyHint>
        <KeyHint of="?">all keys</KeyHint>
      </span>
      <span className="ml-auto flex flex-wrap gap-x-4 gap-y-1 [&>span]:flex [&>span]:items-center [&>span]:gap-1.5">
        <span>
          <RoomMark state="clear" /> room
        </span>
        <span>
          <RoomMark state="tight" /> less than the rule
        </span>
        <span>
          <RoomMark state="over" /> over a limit
        </span>
        <span>
          <RoomMark state="unknown" /> not known
        </span>
        <span>
          <RevisionMark state="draft" /> draft
        </span>
      </span>
    </div>
  )
}
