import { MutationCache, QueryClient } from '@tanstack/react-query'
import { ApiError, messageOf } from './api-client.ts'
import { notify } from './messages.ts'

/** Codes that a page or form shows itself; every other failed change is said once at the foot of the page. */
const shownInPlace = new Set([
  'invalid_input',
  'weak_password',
  'wrong_credentials',
  'email_taken',
  'stale_version',
])

export const queryClient = new QueryClient({
  defaultOptions: {
    queries: {
      staleTime: 15_000,
      // A refusal stays a refusal; only a lost connection or a busy server is worth asking again.
      retry: (count, error) =>
        count < 2 && error instanceof ApiError && (error.code === 'offline' || error.code === 'busy'),
    },
    mutations: { retry: false },
  },
  mutationCache: new MutationCache({
    onError: (error, _variables, _context, mutation) => {
      if (mutation.meta?.shownInPlace === true) return
      if (error instanceof ApiError && shownInPlace.has(error.code)) return
      notify(messageOf(error), { tone: 'problem' })
    },
  }),
})
