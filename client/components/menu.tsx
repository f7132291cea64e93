import { DropdownMenu } from 'radix-ui'
import { useState, type ReactNode } from 'react'
import { Link } from 'react-router-dom'
import { Chevron } from './select-field.tsx'

interface MenuProps {
  /** What the control says. */
  label: ReactNode
  /** `button`: framed; `text`: as a link in a line. */
  look?: 'button' | 'text'
  size?: 'field' | 'small'
  /** Where the label alone does not say it. */
  ariaLabel?: string
  align?: 'start' | 'end'
  tabIndex?: number
  children: ReactNode
}

/** A control that opens a list of acts. Not modal: the page behind stays readable and is not hidden from readers. */
export function Menu(props: MenuProps) {
  const { label, look = 'button', size = 'field', ariaLabel, align = 'start', tabIndex, children } = props
  const [container, setContainer] = useState<HTMLElement | null>(null)
  return (
    <DropdownMenu.Root
      modal={false}
      onOpenChange={(open) => {
        if (open) setContainer(document.getElementById('menus'))
      }}
    >
      <DropdownMenu.Trigger
        className={look === 'button' ? 'button' : 'text-button'}
        data-size={size}
        aria-label={ariaLabel}
        tabIndex={tabIndex}
      >
        {label} <Chevron />
      </DropdownMenu.Trigger>
      <DropdownMenu.Portal container={container}>
        <DropdownMenu.Content className="menu" align={align} sideOffset={4} collisionPadding={12}>
          {children}
        </DropdownMenu.Content>
      </DropdownMenu.Portal>
    </DropdownMenu.Root>
  )
}

interface MenuItemProps {
  onSelect(): void
  disabled?: boolean
  children: ReactNode
}

export function MenuItem({ onSelect, disabled = false, children }: MenuItemProps) {
  return (
    <DropdownMenu.Item className="menu-item" disabled={disabled} onSelect={onSelect}>
      {children}
    </DropdownMenu.Item>
  )
}

export function MenuLink({ to, children }: { to: string; children: ReactNode }) {
  return (
    <DropdownMenu.Item className="menu-item" asChild>
      <Link to={to}>{children}</Link>
    </DropdownMenu.Item>
  )
}

interface MenuChoiceProps<T extends string> {
  label: string
  value: T
  options: readonly { value: NoInfer<T>; label: string }[]
  onChange(value: NoInfer<T>): void
}

/** One of several, chosen inside a menu. */
export function MenuChoice<T extends string>({ label, value, options, onChange }: MenuChoiceProps<T>) {
  return (
    <DropdownMenu.RadioGroup
      value={value}
      onValueChange={(chosen) => {
        const option = options.find((o) => o.value === chosen)
        if (option) onChange(option.value)
      }}
    >
      <DropdownMenu.Label className="px-3 pt-2 pb-1 text-12 text-ink-3 cut-label">{label}</DropdownMenu.Label>
      {options.map((option) => (
        <DropdownMenu.RadioItem
          key={option.value}
          value={option.value}
          className="menu-item"
          onSelect={(event) => event.preventDefault()}
        >
          <span className="flex w-3 justify-center">
            <DropdownMenu.ItemIndicator className="size-2 bg-current" />
          </span>
          {option.label}
        </DropdownMenu.RadioItem>
      ))}
    </DropdownMenu.RadioGroup>
  )
}

export const MenuRule = () => <DropdownMenu.Separator className="my-1 h-px bg-hair" />

export const MenuHead = ({ children }: { children: ReactNode }) => (
  <DropdownMenu.Label className="px-3 pt-1.5 pb-1 text-13">{children}</DropdownMenu.Label>
)
