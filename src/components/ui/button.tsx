import type { ComponentProps } from 'react'

export interface ButtonProps extends ComponentProps<'button'> {
  kind?: 'plain' | 'primary' | 'danger' | 'link'
  small?: boolean
  /** Why it cannot be pressed now. The button stays reachable and says it; a plain `disabled` would hide the reason. */
  unavailable?: string | null
  /** Pressed and not yet answered. */
  pending?: boolean
}

export function Button({ kind = 'plain', small = false, unavailable, pending = false, type = 'button', className = '', onClick, title, children, ...rest }: ButtonProps) {
  const off = pending || Boolean(unavailable)
  const classes = ['btn', kind === 'plain' ? '' : `btn-${kind}`, small ? 'btn-small' : '', className].filter(Boolean).join(' ')
  return (
    <button
      {...rest}
      type={type}
      className={classes}
      title={unavailable ?? title}
      aria-description={unavailable ?? undefined}
      aria-disabled={off || undefined}
      aria-busy={pending || undefined}
      onClick={(event) => {
        if (off) event.preventDefault()
        else onClick?.(event)
      }}
    >
      {children}
    </button>
  )
}
