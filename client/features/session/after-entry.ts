import { useNavigate, useSearchParams } from 'react-router-dom'
import type { Session } from '#shared/api/session.ts'
import { messageOf } from '#client/lib/api-client.ts'
import { notify } from '#client/lib/messages.ts'
import { paths, safeNext } from '#client/lib/paths.ts'
import { moveVisitorWork } from '#client/lib/visitor-work.ts'

/** Where somebody goes who just came in: to the plan that came along, to where they were going, or to the projects. */
export function useAfterEntry() {
  const navigate = useNavigate()
  const [search] = useSearchParams()
  return async (session: Session) => {
    const next = safeNext(search.get('next'))
    const first = session.workspaces[0]
    const fallback = next ?? (first ? paths.projects(first.id) : paths.front)
    try {
      const moved = await moveVisitorWork(session, localStorage)
      if (moved.kind === 'moved') {
        const { workspaceId, projectId, channel } = moved
        notify(`“${channel.name}” is now kept in the project “From this browser”.`)
        await navigate(next ?? paths.channelPlan(workspaceId, projectId, channel.id), { replace: true })
        return
      }
      if (moved.kind === 'nowhere') notify('Your plan stays in this browser: your role adds no channels.')
    } catch (error) {
      notify(`Your plan stays in this browser: ${messageOf(error)}`, { tone: 'problem' })
    }
    await navigate(fallback, { replace: true })
  }
}
