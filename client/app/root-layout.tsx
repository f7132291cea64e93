import { useEffect, useRef, useState } from 'react'
import { Outlet, ScrollRestoration, useLocation, useNavigation } from 'react-router-dom'
import { Notices, StatusRegion } from '#client/components/status.tsx'
import { KeysDialog } from '#client/components/keys.tsx'
import { useLetterKey } from '#client/hooks/use-letter-key.ts'
import { announce } from '#client/lib/messages.ts'
import { useSession } from '#client/features/session/api.ts'
import { TopBar } from './top-bar.tsx'

/** The frame of all pages: top bar, the page, the one status region, messages. */
export function RootLayout() {
  const [keysOpen, setKeysOpen] = useState(false)
  const { data: session } = useSession()
  useLetterKey('?', () => setKeysOpen(true))
  useArrival()
  return (
    <div className="flex min-h-dvh flex-col">
      <a
        href="#page"
        className="button sr-only focus:not-sr-only focus:absolute focus:top-2 focus:left-2 focus:z-50"
      >
        Skip to the page
      </a>
      <TopBar />
      <main id="page" tabIndex={-1} className="flex flex-1 flex-col outline-none focus-visible:shadow-none">
        <Outlet />
      </main>
      {session?.demo && (
        <footer className="no-print px-5 pt-1 pb-2 text-12 text-ink-3 max-sm:px-3">
          Demonstration. All people, places, firms and part codes in it are invented.
        </footer>
      )}
      <StatusRegion />
      <Notices />
      <KeysDialog open={keysOpen} onClose={() => setKeysOpen(false)} />
      <ScrollRestoration />
    </div>
  )
}

/** After a change of page: its title is said, and focus that was lost with the old page goes to the new one. */
function useArrival() {
  const { pathname } = useLocation()
  const { state } = useNavigation()
  const before = useRef(pathname)
  useEffect(() => {
    if (state !== 'idle' || before.current === pathname) return
    before.current = pathname
    const timer = setTimeout(() => {
      announce(document.title)
      if (document.activeElement === document.body)
        document.getElementById('page')?.focus({ preventScroll: true })
    }, 100)
    return () => clearTimeout(timer)
  }, [pathname, state])
}
