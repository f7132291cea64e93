import { useEffect, useRef } from 'react'

export interface FormError {
  /** Id of the field. */
  id: string
  message: string
}

/** What is wrong with a form, in the words that stand beside its fields; takes focus when it appears. */
export function ErrorSummary({ errors, attempt }: { errors: readonly FormError[]; attempt: number }) {
  const element = useRef<HTMLDivElement>(null)
  const focusedFor = useRef(0)
  // The errors may be rendered after the attempt was counted.
  useEffect(() => {
    if (attempt === focusedFor.current || !element.current) return
    focusedFor.current = attempt
    element.current.focus()
  })
  if (errors.length === 0) return null
  return (
    <div
      ref={element}
      tabIndex={-1}
      role="group"
      aria-labelledby="error-summary"
      className="mb-4 border-l-4 border-minium py-1 pl-4"
    >
      <h2 id="error-summary">
        {errors.length === 1 ? 'One answer needs a change' : `${errors.length} answers need a change`}
      </h2>
      <ul className="mt-1 text-13">
        {errors.map((error) => (
          <li key={error.id}>
            <a
              href={`#${error.id}`}
              className="text-minium"
              onClick={(event) => {
                event.preventDefault()
                document.getElementById(error.id)?.focus()
              }}
            >
              {error.message}
            </a>
          </li>
        ))}
      </ul>
    </div>
  )
}
