import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query'
import { isAllowed, type Action } from '#shared/api/permissions.ts'
import { sessionApi, type Session, type SignIn, type SignUp, type Workspace } from '#shared/api/session.ts'
import { call } from '#client/lib/api-client.ts'

export const sessionQuery = queryOptions({
  queryKey: ['session'],
  queryFn: ({ signal }) => call(sessionApi.get, { signal }),
  staleTime: 60_000,
})

export const useSession = () => useQuery(sessionQuery)

/** The workspace of the address, among those of the person; undefined while unknown, null where it is none of theirs. */
export function useWorkspace(workspaceId: string | undefined): Workspace | null | undefined {
  const { data } = useSession()
  if (!data) return undefined
  return data.workspaces.find((w) => w.id === workspaceId) ?? null
}

/** Whether the person may do this in the workspace. False until it is known. */
export function useMay(workspaceId: string | undefined, action: Action): boolean {
  const workspace = useWorkspace(workspaceId)
  return workspace ? isAllowed(workspace.roles, action) : false
}

function useSessionChange<T>(change: (input: T) => Promise<Session>) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: change,
    meta: { shownInPlace: true },
    onSuccess: (session) => {
      // Nothing of whoever was here before stays in memory.
      client.clear()
      client.setQueryData(sessionQuery.queryKey, session)
    },
  })
}

export const useSignIn = () => useSessionChange((body: SignIn) => call(sessionApi.signIn, { body }))

export const useSignUp = () => useSessionChange((body: SignUp) => call(sessionApi.signUp, { body }))

export function useSignOut() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => call(sessionApi.signOut),
    onSuccess: async () => {
      client.clear()
      await client.fetchQuery(sessionQuery)
    },
  })
}
