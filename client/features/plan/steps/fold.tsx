import type { ReactNode } from 'react'

interface FoldProps {
  title: string
  /** What is inside, in a few words, so that one need not open it to know. */
  say?: string
  children: ReactNode
}

/** A part of a step that waits folded: its heading says the outcome already. */
export function Fold({ title, say, children }: FoldProps) {
  return (
    <details className="plan-fold">
      <summary>
        {title}
        {say !== undefined && <span className="fold-say">{say}</span>}
      </summary>
      {children}
    </details>
  )
}
