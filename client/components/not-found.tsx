import { Link } from 'react-router-dom'
import { paths } from '#client/lib/paths.ts'

/** Nothing there, or nothing that this person may know of: the two look alike on purpose. */
export function NotFound() {
  return (
    <div className="mx-5 my-8 max-w-2xl max-sm:mx-3">
      <h1>Not found</h1>
      <p className="mt-2 text-16">
        There is no page at this address, or it belongs to a workspace that you are not a member of.
      </p>
      <p className="mt-4 flex gap-6 text-14">
        <Link to={paths.front}>Front page</Link>
        <Link to={paths.help}>Help</Link>
      </p>
    </div>
  )
}

/** Inside the workspace: who can grant it. */
export function NoPermission({ what, who }: { what: string; who: string }) {
  return (
    <div className="mx-5 my-8 max-w-2xl max-sm:mx-3">
      <h1>Not open to your role</h1>
      <p className="mt-2 text-16">
        {what} takes {who}. An owner of the workspace can give you that role.
      </p>
    </div>
  )
}
