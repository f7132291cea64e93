import { useState } from 'react'
import type { Channel } from '#shared/api/channels.ts'
import { announce, notify } from '#client/lib/messages.ts'
import { useChannelChanges } from './api.ts'
import { channelNumber } from './words.ts'

/** What can be done with rows: select, copy, delete with undo. */
export function useRowActs(workspaceId: string, projectId: string) {
  const { copy, remove, restore } = useChannelChanges(workspaceId, projectId)
  const [selection, setSelection] = useState<ReadonlySet<string>>(new Set())

  const forget = (channels: readonly Channel[]) =>
    setSelection((chosen) => {
      const next = new Set(chosen)
      for (const channel of channels) next.delete(channel.id)
      return next
    })

  const handleDelete = async (channels: readonly Channel[]) => {
    const gone: Channel[] = []
    try {
      for (const channel of channels) {
        await remove.mutateAsync(channel)
        gone.push(channel)
      }
    } catch {
      // Said at the foot of the page by the mutation; what did go can still be undone.
    }
    if (gone.length === 0) return
    forget(gone)
    const what =
      gone.length === 1
        ? `CH ${gone.map(channelNumber).join('')} was deleted.`
        : `${gone.length} channels were deleted.`
    notify(what, {
      action: { label: 'Undo', onAct: () => gone.forEach((channel) => restore.mutate(channel.id)) },
    })
  }

  const handleCopy = async (channels: readonly Channel[]) => {
    try {
      for (const channel of channels) {
        const made = await copy.mutateAsync(channel)
        notify(`CH ${channelNumber(channel)} was copied to CH ${channelNumber(made)}.`)
      }
    } catch {
      // Said at the foot of the page by the mutation.
    }
  }

  const handleSelect = (channel: Channel) => {
    const chosen = selection.has(channel.id)
    setSelection((current) => {
      const next = new Set(current)
      if (!next.delete(channel.id)) next.add(channel.id)
      return next
    })
    announce(`CH ${channelNumber(channel)} ${chosen ? 'left out' : 'selected'}.`)
  }

  return {
    selection,
    clear: () => setSelection(new Set()),
    handleDelete,
    handleCopy,
    handleSelect,
    isBusy: copy.isPending || remove.isPending || restore.isPending,
  }
}
