import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router-dom'
import { whoMay } from '#shared/api/permissions.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { Button } from '#client/components/buttons.tsx'
import { ErrorSummary } from '#client/components/error-summary.tsx'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { SelectField } from '#client/components/select-field.tsx'
import { Failure } from '#client/components/states.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { channelsQuery, useChannelChanges } from '#client/features/channels/api.ts'
import { channelNumber } from '#client/features/channels/words.ts'
import { useMay } from '#client/features/session/api.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { ApiError, messageOf } from '#client/lib/api-client.ts'
import { paths } from '#client/lib/paths.ts'

const EMPTY = 'empty'

/** Adds a channel: with nothing set, or with all answers of one that the board has. */
export function NewChannelPage() {
  const { workspaceId, projectId } = useRouteIds()
  const { data: channels } = useQuery(channelsQuery(workspaceId, projectId))
  const { create } = useChannelChanges(workspaceId, projectId)
  const may = useMay(workspaceId, 'channel.create')
  const navigate = useNavigate()
  const [name, setName] = useState('')
  const [group, setGroup] = useState('')
  const [from, setFrom] = useState(EMPTY)
  const [errors, setErrors] = useState<{ id: string; message: string }[]>([])
  const [general, setGeneral] = useState<string | null>(null)
  const [attempt, setAttempt] = useState(0)
  usePageTitle(errors.length > 0 ? 'Error: Add a channel' : 'Add a channel')

  const refuse = (error: unknown) => {
    const fields = error instanceof ApiError ? Object.entries(error.fields) : []
    setErrors(fields.map(([path, message]) => ({ id: path.endsWith('name') ? 'name' : path, message })))
    setGeneral(fields.length > 0 ? null : messageOf(error))
    setAttempt((n) => n + 1)
  }

  const submit = () => {
    setGeneral(null)
    if (name.trim() === '') {
      setErrors([{ id: 'name', message: 'Name: type what is measured, such as “Stilling-well level”.' }])
      setAttempt((n) => n + 1)
      return
    }
    setErrors([])
    const source = channels?.find((channel) => channel.id === from)
    create.mutate(
      { document: source ? { ...source.document, name: name.trim() } : openDocument(name.trim()), group },
      {
        onSuccess: (channel) => void navigate(paths.channelPlan(workspaceId, projectId, channel.id)),
        onError: refuse,
      },
    )
  }

  const messageFor = (id: string) => errors.find((error) => error.id === id)?.message
  return (
    <>
      <PageHead title="Add a channel" say="One sensor with its way to a converter." />
      <FormSheet>
        <form
          noValidate
          className="grid gap-4"
          onSubmit={(event) => {
            event.preventDefault()
            submit()
          }}
        >
          <ErrorSummary errors={errors} attempt={attempt} />
          {general !== null && <Failure title={general} safe="Nothing was stored." />}
          <TextField
            id="name"
            label="Name"
            help="What is measured."
            autoComplete="off"
            value={name}
            error={messageFor('name')}
            onChange={(event) => setName(event.target.value)}
          />
          <TextField
            id="group"
            label="Location or group"
            help="Channels are listed by it. May stay empty."
            list="locations"
            value={group}
            error={messageFor('group')}
            onChange={(event) => setGroup(event.target.value)}
          />
          <datalist id="locations">
            {[...new Set((channels ?? []).map((channel) => channel.group).filter(Boolean))].map(
              (location) => (
                <option key={location} value={location} />
              ),
            )}
          </datalist>
          <SelectField
            label="Start with"
            value={from}
            options={[
              { value: EMPTY, label: 'Nothing set: each step asks' },
              ...(channels ?? []).map((channel) => ({
                value: channel.id,
                label: `The answers of CH ${channelNumber(channel)} ${channel.name}`,
              })),
            ]}
            onChange={setFrom}
          />
          <div>
            <Button
              type="submit"
              kind="primary"
              disabled={create.isPending}
              {...(may ? {} : { inactive: `Adding a channel takes ${whoMay('channel.create')}.` })}
            >
              Add the channel
            </Button>
          </div>
        </form>
      </FormSheet>
    </>
  )
}

/** A draft in which every question is open; the server keeps such drafts, the plan names what is missing. */
function openDocument(name: string): DesignDocument {
  const draft: Pick<DesignDocument, 'format' | 'name'> = { format: 'spandrel-design/1', name }
  // A draft may lack what a finished design must have; the contract's type speaks of finished ones only.
  return draft as DesignDocument
}
