import { useState } from 'react'
import type { Channel } from '#shared/api/channels.ts'
import { Button } from '#client/components/buttons.tsx'
import { Dialog } from '#client/components/dialog.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { ApiError, messageOf } from '#client/lib/api-client.ts'
import { useChannelChanges } from './api.ts'
import { channelNumber } from './words.ts'

interface ChannelDetailsProps {
  channel: Channel
  workspaceId: string
  projectId: string
  /** Locations that other channels have, to choose from. */
  locations: readonly string[]
  onClose(): void
}

/** Name, number and location of a channel. */
export function ChannelDetails({ channel, workspaceId, projectId, locations, onClose }: ChannelDetailsProps) {
  const { update } = useChannelChanges(workspaceId, projectId)
  const [name, setName] = useState(channel.name)
  const [number, setNumber] = useState(channelNumber(channel))
  const [group, setGroup] = useState(channel.group)
  const [errors, setErrors] = useState<Record<string, string>>({})

  const submit = () => {
    const wanted = Number(number)
    if (!/^\d{1,3}$/.test(number.trim()) || wanted < 1) {
      setErrors({ number: 'Number: type a whole number from 1 to 999.' })
      return
    }
    update.mutate(
      { channel, body: { name, number: wanted, group } },
      {
        onSuccess: onClose,
        onError: (error) => {
          const fields = error instanceof ApiError ? error.fields : {}
          setErrors(Object.keys(fields).length > 0 ? fields : { general: messageOf(error) })
        },
      },
    )
  }

  return (
    <Dialog open title={`CH ${channelNumber(channel)}`} onClose={onClose}>
      <form
        noValidate
        className="grid gap-4"
        onSubmit={(event) => {
          event.preventDefault()
          submit()
        }}
      >
        <TextField
          label="Name"
          value={name}
          error={errors.name}
          autoFocus
          onChange={(event) => setName(event.target.value)}
        />
        <TextField
          label="Channel number"
          value={number}
          inputMode="numeric"
          error={errors.number}
          onChange={(event) => setNumber(event.target.value)}
        />
        <TextField
          label="Location or group"
          help="Channels are listed by it. May stay empty."
          value={group}
          list="locations"
          error={errors.group}
          onChange={(event) => setGroup(event.target.value)}
        />
        <datalist id="locations">
          {locations.map((location) => (
            <option key={location} value={location} />
          ))}
        </datalist>
        {errors.general !== undefined && (
          <p role="alert" className="text-13 font-value text-minium">
            {errors.general}
          </p>
        )}
        <div className="flex gap-2">
          <Button type="submit" kind="primary" disabled={update.isPending}>
            Save
          </Button>
          <Button onClick={onClose}>Leave as it is</Button>
        </div>
      </form>
    </Dialog>
  )
}
