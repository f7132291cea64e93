import { useEffect, useState, type ReactNode } from 'react'
import { announce } from '#client/lib/messages.ts'
import { Button } from './buttons.tsx'

const SAID_AFTER = 400
const OFFERED_AFTER = 10_000

/**
 * What is awaited, said after 400 ms; after 10 s a way out is offered. The layout around it stands already, with
 * dashes for values.
 */
export function Awaited({ what, onRetry }: { what: string; onRetry?: () => void }) {
  const [late, setLate] = useState<'no' | 'said' | 'offered'>('no')
  useEffect(() => {
    const first = setTimeout(() => {
      setLate('said')
      announce(`Waiting for ${what}.`)
    }, SAID_AFTER)
    const second = setTimeout(() => setLate('offered'), OFFERED_AFTER)
    return () => {
      clearTimeout(first)
      clearTimeout(second)
    }
  }, [what])
  return (
    <p className="min-h-5 text-13 text-ink-2">
      {late !== 'no' && <>Waiting for {what}. </>}
      {late === 'offered' && onRetry && (
        <button type="button" className="text-button" onClick={onRetry}>
          Try again
        </button>
      )}
    </p>
  )
}

interface FailureProps {
  /** What failed, as a sentence. */
  title: string
  /** What is safe. */
  safe?: string
  /** The one act that helps. */
  onRetry?: () => void
  action?: ReactNode
  reference?: string
}

/** Replaces the smallest area that failed: what failed, what is safe, one act, a reference. */
export function Failure({ title, safe, onRetry, action, reference }: FailureProps) {
  return (
    <div role="alert" className="my-3 border-l-4 border-minium py-1 pl-4">
      <p className="text-14 font-strong">{title}</p>
      {safe !== undefined && <p className="text-13 text-ink-2">{safe}</p>}
      <div className="mt-2 flex items-center gap-4">
        {onRetry && <Button onClick={onRetry}>Try again</Button>}
        {action}
        {reference !== undefined && <span className="text-12 text-ink-3">Reference {reference}</span>}
      </div>
    </div>
  )
}

/** Nothing there yet: one sentence that says what belongs here, and the acts that put it there. */
export function Empty({ children, actions }: { children: ReactNode; actions?: ReactNode }) {
  return (
    <div className="grid justify-items-start gap-3 px-4 py-8">
      <p className="max-w-xl text-14 text-ink-2">{children}</p>
      {actions !== undefined && <div className="flex flex-wrap gap-2">{actions}</div>}
    </div>
  )
}
