import type { RoomState } from '#shared/design/plan.ts'

/**
 * Marks of the four states of room: a small bay, two limits and what is between them. Shape carries the meaning,
 * colour only repeats it, and words always stand beside a mark.
 */

interface MarkProps {
  /** Said by assistive technology; left out where the words stand beside the mark. */
  label?: string
  className?: string
}

const tones: Record<RoomState, string> = {
  clear: 'text-verdigris',
  tight: 'text-ochre',
  over: 'text-minium',
  unknown: 'text-ink-3',
}

/** Colour of words about a state, to stand beside its mark. */
export const roomTone = (state: RoomState): string => tones[state]

const stroke = { fill: 'none', stroke: 'currentColor', strokeWidth: 1.5 } as const

export function RoomMark({ state, label, className }: MarkProps & { state: RoomState }) {
  return (
    <svg
      viewBox="0 0 16 16"
      width="16"
      height="16"
      className={`inline-block flex-none align-[-3px] ${tones[state]} ${className ?? ''}`}
      {...named(label)}
    >
      {state === 'clear' && (
        <>
          <path d="M0 1.25h16M0 14.75h16" {...stroke} />
          <path d="M4.25 5.75h7.5v4.5h-7.5z" {...stroke} />
        </>
      )}
      {state === 'tight' && (
        <>
          <path d="M0 1.25h16M0 14.75h16" {...stroke} />
          <path d="M3.5 2h9v8.3h-9z" fill="currentColor" />
        </>
      )}
      {state === 'over' && (
        <>
          <path d="M0 5.5h2.5M13.5 5.5H16M0 14.75h16" {...stroke} />
          <path d="M3.5 0h9v4.6h-9zM3.5 6.4h9v5.2h-9z" fill="currentColor" />
        </>
      )}
      {state === 'unknown' && (
        <>
          <path d="M0 1.25h16M0 14.75h16" {...stroke} strokeDasharray="2.8 1.7" />
          <path d="M5 8h6" {...stroke} />
        </>
      )}
    </svg>
  )
}

export type RevisionState = 'draft' | 'review' | 'released' | 'superseded'

export const revisionWords: Record<RevisionState, string> = {
  draft: 'Draft',
  review: 'In review',
  released: 'Released',
  superseded: 'Superseded',
}

/** Dashed square, square with arch, solid square with the arch cut out, square struck through. */
export function RevisionMark({ state, label, className }: MarkProps & { state: RevisionState }) {
  const signed = state === 'released' || state === 'superseded'
  return (
    <svg
      viewBox="0 0 15 15"
      width="14"
      height="14"
      className={`inline-block flex-none align-[-2px] ${signed ? 'text-heather' : 'text-ink'} ${className ?? ''}`}
      {...named(label)}
    >
      {state === 'draft' && <path d="M1.5 1.5h12v12h-12z" {...stroke} strokeDasharray="2.6 1.7" />}
      {state === 'review' && <path d="M1.5 1.5h12v12h-12zM1.5 13.5V8a6 6 0 0 1 12 0v5.5" {...stroke} />}
      {state === 'released' && (
        <path d="M.75.75h13.5v13.5H12V8.2a4.5 4.5 0 0 0-9 0v6.05H.75z" fill="currentColor" />
      )}
      {state === 'superseded' && <path d="M1.5 1.5h12v12h-12zM1 14L14 1" {...stroke} />}
    </svg>
  )
}

/** The product's mark: an arch in a square, its two spandrels filled. */
export function ArchMark({ size = 22 }: { size?: number }) {
  return (
    <svg width={size} height={size} viewBox="0 0 24 24" aria-hidden="true" className="flex-none">
      <path d="M0 0h24v13.5A12 12 0 0 0 0 13.5z" fill="var(--verdigris)" />
      <path d="M1.75 24v-9.5a10.25 10.25 0 0 1 20.5 0V24" fill="none" stroke="var(--ink)" strokeWidth="3.5" />
    </svg>
  )
}

export function TickMark({ label, className }: MarkProps) {
  return (
    <svg
      width="12"
      height="10"
      viewBox="0 0 11 9"
      className={`inline-block flex-none text-verdigris ${className ?? ''}`}
      {...named(label)}
    >
      <path d="M1 4.5l3 3L10 1" fill="none" stroke="currentColor" strokeWidth="1.6" />
    </svg>
  )
}

const named = (label: string | undefined) =>
  label === undefined ? { 'aria-hidden': true } : { role: 'img', 'aria-label': label }
