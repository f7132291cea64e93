import { useQueries } from '@tanstack/react-query'
import { useMemo } from 'react'
import type { Channel } from '#shared/api/channels.ts'
import type { Fault, Plan } from '#shared/design/plan.ts'
import { planInWorker, PlanRefused } from '#client/lib/plan-client.ts'
import { usePreferences } from '#client/lib/preferences.ts'
import { errorWords, openWords, roomWords, type ErrorWords, type RoomWords } from './words.ts'

export interface ChannelSummary {
  channel: Channel
  /** undefined while it is being worked out. */
  plan: Plan | null | undefined
  faults: readonly Fault[]
  room: RoomWords | null
  error: ErrorWords
  /** The calculation itself failed. */
  failure: string | null
}

/**
 * Plans of all channels, worked out one after the other away from the page. A plan is kept for as long as the
 * channel's version stands, so that a list that is opened again is there at once.
 */
export function useChannelPlans(channels: readonly Channel[] | undefined): ChannelSummary[] {
  const { decimalSign = '.' } = usePreferences()
  const list = useMemo(() => channels ?? [], [channels])
  return useQueries({
    queries: list.map((channel) => ({
      queryKey: ['plan', channel.id, channel.version],
      queryFn: ({ signal }: { signal: AbortSignal }) => outcomeOf(channel, signal),
      staleTime: Number.POSITIVE_INFINITY,
      gcTime: 30 * 60_000,
      retry: false,
    })),
    combine: (results) =>
      list.map((channel, index): ChannelSummary => {
        const result = results[index]
        const outcome = result?.data
        const plan = outcome?.plan
        return {
          channel,
          plan: result?.isError ? null : plan,
          faults: outcome?.faults ?? [],
          room: plan
            ? roomWords(plan, channel.document, decimalSign)
            : outcome
              ? { state: 'unknown', text: openWords(outcome.faults), least: null }
              : null,
          error: errorWords(plan ?? null, channel.document, decimalSign),
          failure: result?.error instanceof Error ? result.error.message : null,
        }
      }),
  })
}

async function outcomeOf(
  channel: Channel,
  signal: AbortSignal,
): Promise<{ plan: Plan | null; faults: Fault[] }> {
  try {
    return { plan: await planInWorker(channel.document, { signal }), faults: [] }
  } catch (error) {
    // A draft that is not complete is no failure: what is missing is what the list says.
    if (error instanceof PlanRefused) return { plan: null, faults: error.faults }
    throw error
  }
}
