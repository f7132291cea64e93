import { useParams } from 'react-router-dom'

/** Identifiers in the address. A page asks only for those that its own route carries. */
export function useRouteIds() {
  const { workspace = '', project = '', channel = '' } = useParams()
  return { workspaceId: workspace, projectId: project, channelId: channel }
}
