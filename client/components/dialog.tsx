import { useEffect, useId, useRef, type ReactNode } from 'react'

interface DialogProps {
  open: boolean
  title: string
  onClose(): void
  children: ReactNode
  /** Controls at the foot, the safest first. */
  actions?: ReactNode
  /** For tables. */
  wide?: boolean
}

/**
 * The browser's own modal dialog: it keeps focus inside, gives it back when closed and makes the rest inert, without
 * style elements, which the page's policy refuses.
 */
export function Dialog({ open, title, onClose, children, actions, wide = false }: DialogProps) {
  const element = useRef<HTMLDialogElement>(null)
  const titleId = useId()
  useEffect(() => {
    const dialog = element.current
    if (!dialog) return
    if (open && !dialog.open) {
      dialog.showModal()
      // Else the first control has the focus, which is the one that closes.
      dialog.querySelector<HTMLElement>('input, select, textarea')?.focus()
    }
    if (!open && dialog.open) dialog.close()
  }, [open])
  return (
    <dialog
      ref={element}
      className="dialog"
      data-wide={wide || undefined}
      aria-labelledby={titleId}
      onClose={onClose}
      onClick={(event) => {
        if (event.target === element.current) element.current?.close()
      }}
    >
      {open && (
        <div className="dialog-body">
          <div className="mb-3 flex items-baseline gap-4">
            <h2 id={titleId} className="flex-1 text-20">
              {title}
            </h2>
            <button type="button" className="text-button" onClick={() => element.current?.close()}>
              Close
            </button>
          </div>
          {children}
          {actions !== undefined && <div className="mt-5 flex flex-wrap justify-end gap-2">{actions}</div>}
        </div>
      )}
    </dialog>
  )
}
