import { Link, NavLink, useLocation, useNavigate, useParams } from 'react-router-dom'
import { ArchMark } from '#client/components/marks.tsx'
import { Menu, MenuChoice, MenuHead, MenuItem, MenuLink, MenuRule } from '#client/components/menu.tsx'
import { themeOptions } from '#client/components/theme-switch.tsx'
import { useSession, useSignOut } from '#client/features/session/api.ts'
import { notify } from '#client/lib/messages.ts'
import { paths } from '#client/lib/paths.ts'
import { setPreferences, usePreferences } from '#client/lib/preferences.ts'
import type { Session, Workspace } from '#shared/api/session.ts'

const link = 'flex min-h-8 items-center text-ink-2 no-underline hover:text-ink pointer-coarse:min-h-11'

/** Mark, pages, workspace, help, account. Help is always in the same corner. */
export function TopBar() {
  const { data: session } = useSession()
  const params = useParams()
  const { pathname } = useLocation()
  const workspace = session?.workspaces.find((w) => w.id === params.workspace) ?? session?.workspaces[0]
  return (
    <header className="no-print flex min-h-[42px] flex-wrap items-center gap-x-6 px-5 py-1 text-14 max-sm:gap-x-4 max-sm:px-3">
      <Link
        to={paths.front}
        className="mr-1 flex min-h-8 items-center gap-2 text-[15px] font-title tracking-[-0.01em] no-underline [font-stretch:122%] pointer-coarse:min-h-11"
      >
        <ArchMark />
        Spandrel
      </Link>
      <nav aria-label="Main" className="flex flex-wrap gap-x-5">
        {workspace && (
          <NavLink to={paths.projects(workspace.id)} className={navClass}>
            Projects
          </NavLink>
        )}
        <Link
          to={paths.front}
          className={navClass({ isActive: pathname === '/' || pathname.startsWith('/plan') })}
          aria-current={pathname === '/' || pathname.startsWith('/plan') ? 'page' : undefined}
        >
          Quick plan
        </Link>
      </nav>
      <div className="ml-auto flex flex-wrap items-center gap-x-4 text-13 text-ink-2">
        {session?.user && workspace && <WorkspaceName current={workspace} all={session.workspaces} />}
        <Link to={paths.help} className={`${link} underline`}>
          Help
        </Link>
        {session?.user && <AccountMenu session={session} />}
        {session && !session.user && (
          <>
            <Link to={paths.signIn()} className={`${link} underline`}>
              Sign in
            </Link>
            {session.signUpOpen && (
              <Link to={paths.join} className={`${link} underline`}>
                Join
              </Link>
            )}
          </>
        )}
      </div>
      {/* Menus open here, so that they lie within a landmark. */}
      <div id="menus" className="absolute" />
    </header>
  )
}

const navClass = ({ isActive }: { isActive: boolean }) =>
  `${link} ${isActive ? 'font-strong text-ink shadow-[inset_0_-2px_var(--ink)]' : ''}`

function WorkspaceName({ current, all }: { current: Workspace; all: Workspace[] }) {
  if (all.length < 2) return <span className="max-w-56 truncate max-sm:sr-only">{current.name}</span>
  return (
    <Menu
      look="text"
      align="end"
      ariaLabel={`Workspace: ${current.name}. Change it`}
      label={<span className="max-w-40 truncate">{current.name}</span>}
    >
      {all.map((w) => (
        <MenuLink key={w.id} to={paths.projects(w.id)}>
          {w.name}
        </MenuLink>
      ))}
    </Menu>
  )
}

function AccountMenu({ session }: { session: Session }) {
  const { theme } = usePreferences()
  const signOut = useSignOut()
  const navigate = useNavigate()
  if (!session.user) return null
  return (
    <Menu
      look="text"
      align="end"
      ariaLabel={`Account of ${session.user.name}`}
      label={<span className="max-w-40 truncate">{session.user.name}</span>}
    >
      <MenuHead>
        <span className="block font-strong">{session.user.name}</span>
        <span className="block text-12 text-ink-3">{session.user.email}</span>
      </MenuHead>
      <MenuRule />
      <MenuChoice
        label="Theme"
        value={theme}
        options={themeOptions}
        onChange={(value) => setPreferences({ theme: value })}
      />
      <MenuRule />
      <MenuLink to={paths.preferences}>Units and keys</MenuLink>
      <MenuItem
        onSelect={() => {
          // First away from pages that ask for an account, or these would lead to the sign-in page.
          void navigate(paths.front)
          signOut.mutate(undefined, { onSuccess: () => notify('You are signed out.') })
        }}
      >
        Sign out
      </MenuItem>
    </Menu>
  )
}
