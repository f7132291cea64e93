import type { ComponentProps } from 'react'
import { Link, type LinkProps } from 'react-router-dom'

type Kind = 'plain' | 'primary' | 'danger'

interface Look {
  kind?: Kind
  size?: 'field' | 'small'
}

interface ButtonProps extends ComponentProps<'button'>, Look {
  /** Why it cannot be used now. It stays in the tab sequence and the reason is read out with it. */
  inactive?: string | undefined
}

/** `type="button"` unless stated, so that it never sends a form by accident. */
export function Button({
  kind = 'plain',
  size = 'field',
  inactive,
  onClick,
  className,
  ...rest
}: ButtonProps) {
  return (
    <button
      type="button"
      {...rest}
      className={`button ${className ?? ''}`}
      data-kind={kind}
      data-size={size}
      {...(inactive === undefined
        ? {}
        : { 'aria-disabled': true, title: inactive, 'aria-description': inactive })}
      onClick={(event) => {
        if (inactive === undefined) onClick?.(event)
        else event.preventDefault()
      }}
    />
  )
}

export function ButtonLink({ kind = 'plain', size = 'field', className, ...rest }: LinkProps & Look) {
  return <Link {...rest} className={`button ${className ?? ''}`} data-kind={kind} data-size={size} />
}

/** A control that stands inside a sentence: "Take pair". */
export function TextButton({ className, ...rest }: ComponentProps<'button'>) {
  return <button type="button" {...rest} className={`text-button ${className ?? ''}`} />
}
