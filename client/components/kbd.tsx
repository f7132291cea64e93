import type { ReactNode } from 'react'

/** A key, or several pressed together: `<Keys of="Ctrl Shift Up" />`. */
export function Keys({ of }: { of: string }) {
  return (
    <span className="inline-flex gap-1">
      {of.split(' ').map((key) => (
        <kbd key={key} className="key">
          {key}
        </kbd>
      ))}
    </span>
  )
}

/** Key and what it does, for the line at the foot of a sheet. */
export function KeyHint({ of, children }: { of: string; children: ReactNode }) {
  return (
    <span className="inline-flex items-center gap-1.5">
      <Keys of={of} /> {children}
    </span>
  )
}
