import type { ChannelSummary } from './use-channel-plans.ts'
import { channelNumber, sensorWords } from './words.ts'

export const orders = [
  { value: 'number', label: 'Channel number' },
  { value: 'name', label: 'Name' },
  { value: 'room', label: 'Least room first' },
  { value: 'change', label: 'Last change first' },
] as const
export type Order = (typeof orders)[number]['value']

export interface ChannelGroup {
  /** null: the list is not parted by location. */
  name: string | null
  rows: ChannelSummary[]
}

/** Rows that match what is searched for, in order; by location where the order is the channel number. */
export function arrangeChannels(rows: readonly ChannelSummary[], find: string, order: Order): ChannelGroup[] {
  const wanted = find.trim().toLowerCase().split(/\s+/).filter(Boolean)
  const found = rows.filter(({ channel }) => {
    const text =
      `ch ${channelNumber(channel)} ${channel.name} ${channel.group} ${sensorWords(channel.document)}`.toLowerCase()
    return wanted.every((word) => text.includes(word))
  })
  const sorted = [...found].sort(comparison[order])
  if (order !== 'number' || sorted.every((row) => row.channel.group === ''))
    return [{ name: null, rows: sorted }]
  // Locations stand in the order of their first channel.
  const groups = new Map<string, ChannelSummary[]>()
  for (const row of sorted) groups.set(row.channel.group, [...(groups.get(row.channel.group) ?? []), row])
  return [...groups].map(([name, members]) => ({ name: name === '' ? 'No location' : name, rows: members }))
}

const byNumber = (a: ChannelSummary, b: ChannelSummary) => a.channel.number - b.channel.number

/** What is over or not known has no room that could be weighed: over first, not known last. */
const roomOf = ({ room }: ChannelSummary) =>
  room === null || room.state === 'unknown'
    ? Number.POSITIVE_INFINITY
    : (room.least ?? Number.NEGATIVE_INFINITY)

const comparison: Record<Order, (a: ChannelSummary, b: ChannelSummary) => number> = {
  number: byNumber,
  name: (a, b) => a.channel.name.localeCompare(b.channel.name) || byNumber(a, b),
  room: (a, b) => {
    const [left, right] = [roomOf(a), roomOf(b)]
    return left === right ? byNumber(a, b) : left < right ? -1 : 1
  },
  change: (a, b) => b.channel.updatedAt.localeCompare(a.channel.updatedAt),
}
