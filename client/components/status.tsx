import { useSyncExternalStore } from 'react'
import { dismiss, notices, statusText } from '#client/lib/messages.ts'
import { RoomMark } from './marks.tsx'

/** The page's one polite live region. */
export function StatusRegion() {
  const text = useSyncExternalStore(statusText.subscribe, statusText.get, statusText.get)
  return (
    <div role="status" className="sr-only">
      {text}
    </div>
  )
}

/** Lines at the foot of the page; what they say has also been said through the status region. */
export function Notices() {
  const list = useSyncExternalStore(notices.subscribe, notices.get, notices.get)
  if (list.length === 0) return null
  return (
    <section
      aria-label="Messages"
      className="no-print fixed inset-x-0 bottom-3 z-20 flex justify-center px-3"
    >
      <ul className="ruled w-full max-w-xl border-2 border-frame bg-sheet shadow-lift">
        {list.map((notice) => (
          <li key={notice.id} className="flex flex-wrap items-center gap-x-4 gap-y-1 px-4 py-2 text-13">
            {notice.tone === 'problem' && <RoomMark state="over" label="Problem" />}
            <span className="min-w-0 flex-1">{notice.text}</span>
            {notice.action && (
              <button
                type="button"
                className="text-button"
                onClick={() => {
                  dismiss(notice.id)
                  notice.action?.onAct()
                }}
              >
                {notice.action.label}
              </button>
            )}
            <button type="button" className="text-button" onClick={() => dismiss(notice.id)}>
              Close<span className="sr-only"> this message</span>
            </button>
          </li>
        ))}
      </ul>
    </section>
  )
}
